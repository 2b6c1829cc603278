import type { Database } from '#server/database/connection'
import type { ReportsCheck } from '#shared/schemas/user'
import { sha256Hex } from './canonical-json'
import { faultsOf } from './verify-version'

/** What the audit trail holds about one signed version. */
interface Written { reportId: string, number: string, version: number, sha256: string }
type Trail = Map<string, Written>
type SignedRow = Awaited<ReturnType<typeof versionsAfter>>[number]

const BATCH = 200
const keyOf = ({ reportId, version }: { reportId: string, version: number }) => `${reportId}/${version}`

/**
 * Every signed version against its hash, every stored PDF against its own, and both against the audit events that were
 * written with them. A version or a PDF that the trail knows and the tables no longer hold is named too.
 * Reads in batches and lets other requests in between; writes nothing.
 */
export async function verifyReports(db: Database): Promise<ReportsCheck> {
  const signed = await written(db, 'report.signed')
  const made = await written(db, 'report.pdf-made')
  const altered: ReportsCheck['altered'] = []
  let [versions, pdfs] = [0, 0]
  for (let rows = await versionsAfter(db, ''); rows.length > 0; rows = await versionsAfter(db, rows.at(-1)!.id)) {
    for (const row of rows) {
      altered.push(...faultsWith(row, signed, made).map(because => ({ reportId: row.reportId, number: row.number, version: row.version, because })))
      signed.delete(keyOf(row))
      made.delete(keyOf(row))
      versions++
      if (row.bytes) pdfs++
    }
    await new Promise(resolve => setImmediate(resolve))
  }
  for (const { sha256: _, ...gone } of signed.values()) altered.push({ ...gone, because: 'the signed version is missing' })
  return { versions, pdfs, altered: altered.sort((a, b) => a.number.localeCompare(b.number) || a.version - b.version) }
}

async function versionsAfter(db: Database, id: string) {
  return await db.selectFrom('reportVersion').innerJoin('report', 'report.id', 'reportVersion.reportId').leftJoin('reportPdf', 'reportPdf.reportVersionId', 'reportVersion.id')
    .selectAll('reportVersion').select(['report.number', 'reportPdf.bytes', 'reportPdf.sha256 as pdfSha256'])
    .where('reportVersion.id', '>', id).orderBy('reportVersion.id').limit(BATCH).execute()
}

function faultsWith(row: SignedRow, signed: Trail, made: Trail): string[] {
  const inTrail = signed.get(keyOf(row))
  return [
    ...faultsOf(row),
    ...inTrail?.sha256 === row.snapshotSha256 ? [] : ['the audit trail holds another hash'],
    ...inTrail && inTrail.number !== row.number ? ['the number of the report was altered'] : [],
    ...pdfFaults(row, made.get(keyOf(row))),
  ]
}

function pdfFaults({ bytes, pdfSha256 }: SignedRow, inTrail: Written | undefined): string[] {
  if (!bytes) return inTrail ? ['the stored PDF is missing'] : []
  if (sha256Hex(bytes) !== pdfSha256) return ['the stored PDF does not fit its hash']
  return inTrail?.sha256 === pdfSha256 ? [] : ['the audit trail holds another hash of the PDF']
}

/** By report and version. An event that was altered itself is named by the check of the chain. */
async function written(db: Database, name: 'report.signed' | 'report.pdf-made'): Promise<Trail> {
  const events = await db.selectFrom('auditEvent').select(['subjectId as reportId', 'dataJson']).where('name', '=', name).execute()
  const entries = events.map(({ reportId, dataJson }) => ({ reportId, ...dataOf(dataJson) }))
  return new Map(entries.map(entry => [keyOf(entry), entry]))
}

function dataOf(json: string): Omit<Written, 'reportId'> {
  try {
    const { number = '', version = 0, sha256 = '' } = JSON.parse(json) as Partial<Written>
    return { number, version, sha256 }
  }
  catch {
    return { number: '', version: 0, sha256: '' }
  }
}
