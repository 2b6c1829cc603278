import type * as z from 'zod'
import type { Trx } from '#server/database/connection'
import { namesakesOf } from '#server/database/queries/patients'
import { DomainError } from '#shared/errors'
import { patientSchema, type PatientInput, type PatientView } from '#shared/schemas/patient'
import { referralSchema, type ReferralInput } from '#shared/schemas/referral'
import { importFields, neededFields, type ImportField, type ImportLine, type ReferralImportAnswer, type referralImportSchema } from '#shared/schemas/referral-import'
import { now, type ServiceContext } from './context'
import { csvLines } from './csv-lines'
import { moveState } from './move-state'
import { recordAuditEvent } from './record-audit-event'
import { insertPatient } from './save-patient'
import { insertReferral } from './save-referral'

type Import = z.output<typeof referralImportSchema>
type Cells = Partial<Record<ImportField, string>>
interface Read { shown: ImportLine, patient: PatientInput | null, known: PatientView | null, referral: Omit<ReferralInput, 'patientId'> | null }

const mostLines = 500

/**
 * Referrals from a file. Checks every line, says what will happen with each patient, and stores, when asked and when no
 * line has an error, all of them in one transaction: as received, complete or not.
 * @throws DomainError 'not-valid' for a broken file, or with every line when it is to be stored and must not be
 */
export async function importReferrals(context: ServiceContext, input: Import): Promise<ReferralImportAnswer> {
  const file = csvLines(input.text)
  if ('brokenAt' in file) throw new DomainError('not-valid', { fields: [{ path: 'text', message: `The file is broken${file.brokenAt ? ` at line ${file.brokenAt}` : ''}: another number of cells than the head, or quotation marks that do not close.` }] })
  if (file.records.length > mostLines) throw new DomainError('not-valid', { fields: [{ path: 'text', message: `The file has more than ${mostLines} lines. Divide it.` }] })
  const mapping = mappingOf(file.columns, input.mapping)
  return await context.db.transaction().execute(async (trx) => {
    const lines: Read[] = []
    for (const [index, record] of file.records.entries()) lines.push(await readLine(trx, index + 2, cellsOf(record, mapping), input.siteId))
    markDoubles(lines)
    const answer = { columns: file.columns, mapping, lines: lines.map(line => line.shown), stored: 0 }
    if (!input.store) return answer
    if (lines.length === 0 || lines.some(line => line.shown.errors.length > 0)) throw new DomainError('not-valid', { message: 'Nothing was imported: some lines have errors.', details: answer })
    for (const line of lines) await store(context, trx, line, input.siteId)
    return { ...answer, stored: lines.length }
  })
}

/** What was chosen, and columns that bear the name of a field where nothing was. */
function mappingOf(columns: readonly string[], chosen: Import['mapping']): ReferralImportAnswer['mapping'] {
  const plain = (text: string) => text.toLowerCase().replace(/[^a-z]/g, '')
  const entries = importFields.map(field => [field, chosen[field]?.toLowerCase() ?? columns.find(column => plain(column) === plain(field)) ?? ''] as const)
  return Object.fromEntries(entries.filter(([, column]) => columns.includes(column)))
}

function cellsOf(record: Partial<Record<string, string>>, mapping: ReferralImportAnswer['mapping']): Cells {
  return Object.fromEntries(Object.entries(mapping).map(([field, column]) => [field, record[column]?.trim() ?? '']))
}

async function readLine(trx: Trx, line: number, cells: Cells, siteId: string): Promise<Read> {
  const errors: ImportLine['errors'] = neededFields.filter(field => !cells[field]).map(field => ({ field, message: 'It is missing.' }))
  const person = patientSchema.safeParse({ familyName: cells.familyName ?? '', givenName: cells.givenName ?? '', birthDate: cells.birthDate ?? '', sexForLimits: cells.sexForLimits?.toLowerCase() || null, identifier: cells.identifier, phone: cells.phone })
  const physician = await physicianBy(trx, cells.physicianEmail)
  if (physician === undefined) errors.push({ field: 'physicianEmail', message: 'Nobody in the directory has this address.' })
  const referral = referralSchema.omit({ patientId: true }).safeParse({
    siteId, physicianId: physician ?? null, clinicalQuestion: cells.clinicalQuestion, side: cells.side?.toLowerCase() || null, symptoms: cells.symptoms, examination: cells.examination,
    provisionalDiagnosis: cells.provisionalDiagnosis, urgency: cells.urgency?.toLowerCase() || undefined, urgencyReason: cells.urgencyReason,
  })
  for (const issue of [...person.error?.issues ?? [], ...referral.error?.issues ?? []]) {
    const field = String(issue.path[0]) as ImportField
    if (importFields.includes(field) && !errors.some(error => error.field === field)) errors.push({ field, message: wordsOf[field] ?? issue.message })
  }
  const { known, notes, twice } = person.success ? await knownPerson(trx, person.data) : { known: null, notes: [], twice: false }
  if (twice) errors.push({ field: 'familyName', message: 'Two records fit. Put them together first, or enter this referral by hand.' })
  const shown: ImportLine = { line, patient: `${cells.familyName ?? ''}, ${cells.givenName ?? ''}, born ${cells.birthDate ?? ''}`, patientWill: errors.length ? 'stopped' : known ? 'known record' : 'new record', recordNumber: known?.recordNumber ?? null, errors, notes }
  return { shown, patient: person.data ?? null, known, referral: referral.data ?? null }
}

const wordsOf: Partial<Record<ImportField, string>> = { sexForLimits: 'Enter female or male, or leave it blank.', side: 'Enter right, left, both or midline, or leave it blank.', urgency: 'Enter routine, urgent or same-week, or leave it blank.' }

/** undefined: there is an address and nobody has it; null: no address. */
async function physicianBy(trx: Trx, email: string | undefined): Promise<string | null | undefined> {
  if (!email) return null
  const found = await trx.selectFrom('physician').select('id').where('email', '=', email).where('leftOn', 'is', null).execute()
  return found.length === 1 ? found[0]?.id : undefined
}

/** Same name and birth date is the same person; anything less is said and not taken for it. */
async function knownPerson(trx: Trx, person: PatientInput): Promise<{ known: PatientView | null, notes: string[], twice: boolean }> {
  const namesakes = await namesakesOf(trx, person)
  const same = namesakes.filter(namesake => namesake.because === 'same name and birth date')
  const others = namesakes.filter(namesake => namesake.strength !== 'same-birth-date' && !same.includes(namesake))
  return { known: same[0]?.patient ?? null, twice: same.length > 1, notes: others.map(({ patient, because }) => `${patient.recordNumber}: ${because}`) }
}

/** The same new person on two lines of one file would make two records. */
function markDoubles(lines: readonly Read[]): void {
  const seen = new Map<string, number>()
  for (const { shown, patient, known } of lines) {
    if (!patient || known) continue
    const key = [patient.familyName, patient.givenName, patient.birthDate].join('|').toLowerCase()
    const first = seen.get(key)
    if (first === undefined) seen.set(key, shown.line)
    else {
      shown.errors.push({ field: 'familyName', message: `The same person stands in line ${first}. Import one line, then the other.` })
      shown.patientWill = 'stopped'
    }
  }
}

async function store(context: ServiceContext, trx: Trx, { patient, known, referral }: Read, siteId: string): Promise<void> {
  if (!patient || !referral) throw new Error('A line without an error has a patient and a referral.')
  const { id: patientId } = known ?? await insertPatient(context, trx, patient)
  const { id } = await insertReferral(context, trx, { ...referral, patientId })
  await moveState(context, trx, { subject: 'referral', id, from: 'draft', to: 'received', reason: 'imported from a file' })
  await trx.updateTable('referral').set({ receivedAt: now(context) }).where('id', '=', id).execute()
  await recordAuditEvent(context, trx, { name: 'referral.received', subject: 'referral', subjectId: id, siteId, patientId, data: {} })
}
