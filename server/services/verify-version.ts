import type { Database } from '#server/database/connection'
import type { ReportVersion } from '#server/database/tables/report-version'
import { DomainError } from '#shared/errors'
import type { ReportSnapshot } from '#shared/schemas/report'
import { canonicalJson, sha256Hex } from './canonical-json'

type Signed = Pick<ReportVersion, 'version' | 'status' | 'snapshotJson' | 'snapshotSha256' | 'signedAt' | 'signedBy' | 'signedName' | 'signedCredentials' | 'meaning'>

/**
 * What of a signed version no longer fits: its text against its hash, its columns against its text. [] when it is intact.
 * The hash itself is held by the audit event of the signature; `verifyReports` compares the two.
 */
export function faultsOf(row: Signed): string[] {
  if (sha256Hex(row.snapshotJson) !== row.snapshotSha256) return ['the content does not fit its hash']
  const snapshot = JSON.parse(row.snapshotJson) as ReportSnapshot
  const { signature } = snapshot
  const pairs: [string, unknown, unknown][] = [
    ['version', row.version, snapshot.version], ['status', row.status, snapshot.status], ['time', row.signedAt, signature.at], ['signer', row.signedBy, signature.userId],
    ['name', row.signedName, signature.name], ['credentials', row.signedCredentials, signature.credentials], ['meaning', row.meaning, signature.meaning],
  ]
  const differing = pairs.filter(([, column, frozen]) => column !== frozen).map(([name]) => `the ${name} of the signature was altered`)
  return canonicalJson(snapshot) === row.snapshotJson ? differing : [...differing, 'the content is not in canonical form']
}

/**
 * The frozen copy, once it is known to be what was signed.
 * @throws DomainError 'altered' when it is not: an altered version is neither shown nor sent
 */
export function intactSnapshot(row: Signed): ReportSnapshot {
  const faults = faultsOf(row)
  if (faults.length > 0) throw new DomainError('altered', { log: `signed version altered: ${faults.join('; ')}` })
  return JSON.parse(row.snapshotJson) as ReportSnapshot
}

export interface AlteredVersion { reportId: string, number: string, version: number, because: string }

/** Every signed version and stored PDF against its hash, and the hash against the audit event of its signature. */
export async function verifyReports(db: Database): Promise<{ versions: number, altered: AlteredVersion[] }> {
  const rows = await db.selectFrom('reportVersion').innerJoin('report', 'report.id', 'reportVersion.reportId').selectAll('reportVersion').select('report.number').orderBy('report.number').orderBy('version').execute()
  const signed = await signedHashes(db)
  const altered: AlteredVersion[] = []
  for (const row of rows) {
    const inTrail = signed.get(`${row.reportId}/${row.version}`) === row.snapshotSha256 ? [] : ['the audit trail holds another hash']
    const pdf = await pdfFaults(db, row.id)
    for (const because of [...faultsOf(row), ...inTrail, ...pdf]) altered.push({ reportId: row.reportId, number: row.number, version: row.version, because })
  }
  return { versions: rows.length, altered }
}

async function signedHashes(db: Database): Promise<Map<string, string>> {
  const events = await db.selectFrom('auditEvent').select(['subjectId', 'dataJson']).where('name', '=', 'report.signed').execute()
  return new Map(events.map(({ subjectId, dataJson }) => {
    const data = JSON.parse(dataJson) as { version: number, sha256: string }
    return [`${subjectId}/${data.version}`, data.sha256]
  }))
}

async function pdfFaults(db: Database, reportVersionId: string): Promise<string[]> {
  const pdf = await db.selectFrom('reportPdf').selectAll().where('reportVersionId', '=', reportVersionId).executeTakeFirst()
  return pdf && sha256Hex(pdf.bytes) !== pdf.sha256 ? ['the stored PDF does not fit its hash'] : []
}
