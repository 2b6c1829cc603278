import type * as z from 'zod'
import { checkTable } from '#reference-tables/check-table'
import { referenceTable } from '#reference-tables/index'
import { loadTable } from '#reference-tables/load-table'
import { ownTable } from '#reference-tables/own-table'
import type { Trx } from '#server/database/connection'
import { DomainError } from '#shared/errors'
import { ownSetColumns, type ownSetImportSchema, type OwnSetAnswer, type OwnSetRemark } from '#shared/schemas/own-set'
import { referenceTableSchema, type ReferenceTable } from '#shared/schemas/reference-table'
import { canonicalJson, sha256Hex } from './canonical-json'
import { now, type ServiceContext } from './context'
import { csvLines, type CsvLines } from './csv-lines'
import { organisationDay } from './organisation-day'
import { recordAuditEvent } from './record-audit-event'

type Import = z.output<typeof ownSetImportSchema>
interface Read { table: ReferenceTable | null, remarks: OwnSetRemark[] }

/**
 * Checks a laboratory's own table and, when asked and nothing stops it, stores it as the next version of its set. It
 * judges nothing before it is proposed, approved by another person, and its first day has come. Half a table is never stored.
 * @returns every complaint, by line and column
 * @throws DomainError 'not-valid' when it is to be stored and must not be
 */
export async function importSet(context: ServiceContext, input: Import): Promise<OwnSetAnswer> {
  const importedBy = context.actor.userId
  if (!importedBy) throw new DomainError('not-signed-in')
  return await context.db.transaction().execute(async (trx) => {
    const { table, remarks } = input.format === 'csv' ? await readCsv(context, trx, input) : await readJson(context, trx, input.text)
    const answer: OwnSetAnswer = { stored: false, id: table?.id ?? '', version: table?.version ?? 0, rows: table?.rows.length ?? 0, remarks }
    if (!input.store) return answer
    if (!table || remarks.some(remark => remark.strength === 'stop')) throw new DomainError('not-valid', { message: 'The table was not stored: the list says what stops it.', details: answer })
    if (remarks.length > 0 && !input.checksAccepted) throw new DomainError('not-valid', { message: 'The table was not stored: look at the questions and say that they are all right.', details: answer })
    await store(context, trx, table, importedBy)
    return { ...answer, stored: true }
  })
}

async function store(context: ServiceContext, trx: Trx, table: ReferenceTable, importedBy: string): Promise<void> {
  const tableJson = canonicalJson(table)
  const sha256 = sha256Hex(tableJson)
  await trx.insertInto('ownSet').values({ setId: table.id, version: table.version, tableJson, sha256, importedBy, importedAt: now(context) }).execute()
  await recordAuditEvent(context, trx, { name: 'shelf.set-imported', subject: 'reference-set', subjectId: table.id, data: { setId: table.id, setVersion: table.version, rows: table.rows.length, sha256 } })
}

/** Versions are counted here, so that no import can take the place of another one. */
async function nextVersion(trx: Trx, id: string): Promise<number> {
  const last = await trx.selectFrom('ownSet').select(eb => eb.fn.max('version').as('version')).where('setId', '=', id).executeTakeFirst()
  return (last?.version ?? 0) + 1
}

const stop = (message: string, row: number | null = null, column = ''): OwnSetRemark => ({ strength: 'stop', row, column, message })
const takenName = (id: string): OwnSetRemark[] => referenceTable(id) ? [stop(`"${id}" is the name of a set that comes with the program. Choose another one.`, null, 'id')] : []

async function readCsv(context: ServiceContext, trx: Trx, { head, text }: Extract<Import, { format: 'csv' }>): Promise<Read> {
  const lines = recordsOf(text)
  if ('remark' in lines) return { table: null, remarks: [lines.remark] }
  const { table, remarks, lineOf } = ownTable({ ...head, version: await nextVersion(trx, head.id), date: await organisationDay({ ...context, db: trx }) }, lines.records)
  const found = checkTable(table).map(({ rowId, strength, column, message }): OwnSetRemark => ({ strength, row: lineOf.get(rowId) ?? null, column, message }))
  const inLines = (message: string) => message.replace(new RegExp(`${head.id}-(\\d{3})`, 'g'), (_, n: string) => `in line ${Number(n) + 1}`)
  const unfit = remarks.length || found.some(one => one.strength === 'stop') ? [] : loadProblems(table).map(message => stop(inLines(message)))
  return { table, remarks: [...takenName(head.id), ...missingCells(lines.records), ...remarks, ...found, ...unfit].toSorted((a, b) => (a.row ?? 0) - (b.row ?? 0)) }
}

function recordsOf(text: string): { records: CsvLines['records'] } | { remark: OwnSetRemark } {
  const lines = csvLines(text)
  if ('brokenAt' in lines) return { remark: stop('A line has another number of cells than the head, or quotation marks that do not close.', lines.brokenAt) }
  const { columns, records } = lines
  if (records.length === 0) return { remark: stop('The file has no lines below its head.') }
  if (records.length > 2000) return { remark: stop('The file has more than 2000 lines.') }
  const unknown = columns.filter(name => !(ownSetColumns as readonly string[]).includes(name))
  return unknown.length ? { remark: stop(`The head has columns that are not known: ${unknown.join(', ')}. Begin with the template.`, 1) } : { records }
}

/** `technique`, `quantity`, `bound` and `value` have to be there in each line. */
function missingCells(records: readonly Partial<Record<string, string>>[]): OwnSetRemark[] {
  return records.flatMap((record, index) => (['bound', 'value'] as const).filter(column => !record[column]?.trim()).map(column => stop(column === 'bound' ? 'Enter upper or lower.' : 'Enter the limit.', index + 2, column)))
}

async function readJson(context: ServiceContext, trx: Trx, text: string): Promise<Read> {
  let raw: unknown
  try {
    raw = JSON.parse(text)
  }
  catch {
    return { table: null, remarks: [stop('The file is not JSON.')] }
  }
  const parsed = referenceTableSchema.safeParse(raw)
  if (!parsed.success) return { table: null, remarks: parsed.error.issues.slice(0, 200).map(issue => stop(issue.message, null, issue.path.join('.'))) }
  const version = await nextVersion(trx, parsed.data.id)
  const table = { ...parsed.data, version, changes: [...parsed.data.changes.filter(change => change.version < version), { version, date: await organisationDay({ ...context, db: trx }), what: parsed.data.changes.at(-1)?.what ?? '' }] }
  const found = checkTable(table).map(({ rowId, strength, column, message }): OwnSetRemark => ({ strength, row: null, column: `${rowId} ${column}`, message }))
  return { table, remarks: [...takenName(table.id), ...loadProblems(table).map(message => stop(message)), ...found] }
}

/** What makes the set unfit to load as a whole: rows that would apply equally, percentiles that it does not declare. */
function loadProblems(table: ReferenceTable): string[] {
  try {
    loadTable(structuredClone(table))
    return []
  }
  catch (error) {
    return [error instanceof Error ? error.message.replace(/^Reference table [^:]*: /, '') : 'The set does not load.']
  }
}
