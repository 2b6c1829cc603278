import type { Trx } from '#server/database/connection'
import type { ServiceContext } from './context'
import { recordAuditEvent } from './record-audit-event'

/**
 * A report that was marked ready to sign was checked on other numbers than those that stand now: the mark goes, and the
 * trail says so. Every service that changes what a study is assessed from calls this in its transaction.
 */
export async function withdrawReady(context: ServiceContext, trx: Trx, changed: { studyId: string } | { referralId: string } | { patientId: string }): Promise<void> {
  const ready = await trx.selectFrom('report').innerJoin('study', 'study.id', 'report.studyId')
    .select(['report.id', 'study.id as studyId', 'study.siteId', 'study.patientId'])
    .where('report.readyFingerprint', 'is not', null)
    .$if('studyId' in changed, query => query.where('study.id', '=', (changed as { studyId: string }).studyId))
    .$if('referralId' in changed, query => query.where('study.referralId', '=', (changed as { referralId: string }).referralId))
    .$if('patientId' in changed, query => query.where('study.patientId', '=', (changed as { patientId: string }).patientId))
    .where('study.state', 'in', ['handed-over', 'returned']).execute()
  for (const { id, studyId, siteId, patientId } of ready) {
    await trx.updateTable('report').set({ readyFingerprint: null }).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'report.ready-withdrawn', subject: 'report', subjectId: id, siteId, patientId, data: { studyId } })
  }
}
