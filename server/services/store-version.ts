import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import type { Report } from '#server/database/tables/report'
import type { ReportVersion } from '#server/database/tables/report-version'
import type { ReportSnapshot } from '#shared/schemas/report'
import type { ReportStatus } from '#shared/states'
import { canonicalJson, sha256Hex } from './canonical-json'
import type { ServiceContext } from './context'
import { writeStateChange } from './move-state'
import { auditHead, recordAuditEvent } from './record-audit-event'

export interface SignedPlace { siteId: string, patientId: string }

/**
 * Freezes one signed version: the canonical text of its snapshot and the hash that binds the signature to it
 * (21 CFR 11.70). The head of the audit trail is the one before this signature's own event, which holds the hash.
 */
export async function storeVersion(context: ServiceContext, trx: Trx, report: Report, snapshot: ReportSnapshot, { siteId, patientId }: SignedPlace, from: ReportStatus): Promise<ReportVersion> {
  const snapshotJson = canonicalJson(snapshot)
  const { name, credentials, meaning, at, userId } = snapshot.signature
  const row = {
    id: randomUUID(), reportId: report.id, version: snapshot.version, status: snapshot.status, reason: snapshot.reason,
    snapshotJson, snapshotSha256: sha256Hex(snapshotJson), calculationVersion: snapshot.assessment.calculationVersion,
    signedBy: userId, signedAt: at, signedName: name, signedCredentials: credentials, meaning, auditHead: await auditHead(trx),
  }
  const stored = await trx.insertInto('reportVersion').values(row).returningAll().executeTakeFirstOrThrow()
  await writeStateChange(context, trx, { subject: 'report-version', id: stored.id, from, to: snapshot.status, reason: snapshot.reason })
  await recordAuditEvent(context, trx, { name: 'report.signed', subject: 'report', subjectId: report.id, siteId, patientId, data: { number: report.number, version: snapshot.version, status: snapshot.status, sha256: row.snapshotSha256 } })
  return stored
}
