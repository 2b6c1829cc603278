import { placeOfReport } from '#server/database/queries/reports'
import { DomainError } from '#shared/errors'
import type { ServiceContext } from './context'
import { recordAuditEvent } from './record-audit-event'
import { versionAsked } from './view-report'
import { intactSnapshot } from './verify-version'

/**
 * Notes that the patient gets a copy of a signed version: who hands it over, and how it was made sure that it is the
 * patient. The PDF itself is the stored one, with its hash.
 * @throws DomainError 'not-found' · 'altered' · 'wrong-state' for a version that was replaced or withdrawn
 */
export async function notePatientCopy(context: ServiceContext, { reportId, version, handedTo }: { reportId: string, version: number, handedTo: string }): Promise<void> {
  const [asked, newest] = [await versionAsked(context, reportId, version), await versionAsked(context, reportId)]
  const { number } = intactSnapshot(asked)
  if (newest.version !== asked.version || newest.status === 'entered-in-error') throw new DomainError('wrong-state', { message: 'This version does not count any more. A patient gets the one that stands.' })
  const place = await placeOfReport(context.db, reportId)
  await context.db.transaction().execute(trx => recordAuditEvent(context, trx, { name: 'report.copy-for-patient', subject: 'report', subjectId: reportId, siteId: place?.siteId, patientId: place?.patientId, data: { number, version, handedTo } }))
}
