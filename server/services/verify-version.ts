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
  const snapshot = readSnapshot(row.snapshotJson)
  if (!snapshot) return ['the content is not a report']
  const { signature } = snapshot
  const pairs: [string, unknown, unknown][] = [
    ['version', row.version, snapshot.version], ['status', row.status, snapshot.status], ['time', row.signedAt, signature.at], ['signer', row.signedBy, signature.userId],
    ['name', row.signedName, signature.name], ['credentials', row.signedCredentials, signature.credentials], ['meaning', row.meaning, signature.meaning],
  ]
  const differing = pairs.filter(([, column, frozen]) => column !== frozen).map(([name]) => `the ${name} of the signature was altered`)
  return canonicalJson(snapshot) === row.snapshotJson ? differing : [...differing, 'the content is not in canonical form']
}

/** Null for a text that no signature of ours froze; its hash may fit all the same. */
function readSnapshot(text: string): ReportSnapshot | null {
  try {
    const snapshot = JSON.parse(text) as ReportSnapshot
    return typeof snapshot.signature === 'object' ? snapshot : null
  }
  catch {
    return null
  }
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
