import { sql } from 'kysely'
import type { ChaseRow } from '#shared/schemas/delivery'
import type { Database } from '../connection'
import { deliveryColumns, deliveryJoins, namedRow } from './deliveries'

/** Sent before this moment, not acknowledged, without an open task about it; superseded versions need no receipt. */
export async function unacknowledged(db: Database, before: string) {
  return await db.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').innerJoin('report', 'report.id', 'reportVersion.reportId').innerJoin('study', 'study.id', 'report.studyId').innerJoin('referral', 'referral.id', 'study.referralId')
    .innerJoin('physician', 'physician.id', 'delivery.physicianId').innerJoin('practice', 'practice.id', 'delivery.practiceId')
    .select(['delivery.id', 'delivery.siteId', 'delivery.sentAt', 'delivery.stateSince', 'report.number', 'reportVersion.version', 'referral.urgency', 'physician.name as recipient', 'practice.name as practiceName'])
    .select(sql<string | null>`(SELECT max(done_at) FROM task WHERE task.subject_id = delivery.id AND task.kind = 'delivery-unacknowledged')`.as('lastDoneAt'))
    .where('delivery.state', '=', 'sent').where('delivery.stateSince', '<=', before).where('delivery.acknowledgedAt', 'is', null)
    .where(sql<boolean>`NOT EXISTS (SELECT 1 FROM task WHERE task.subject_id = delivery.id AND task.kind = 'delivery-unacknowledged' AND task.done_at IS NULL)`)
    .where(sql<boolean>`NOT EXISTS (SELECT 1 FROM report_version later WHERE later.report_id = report_version.report_id AND later.version > report_version.version)`)
    .orderBy('delivery.stateSince').limit(500).execute()
}

/** What may have to be gone after at these sites, with the owner of its task. */
export async function chaseable(db: Database, siteIds: readonly string[]): Promise<(Omit<ChaseRow, 'since' | 'dueAt'> & { sentAt: string | null })[]> {
  const rows = await deliveryJoins(db).innerJoin('referral', 'referral.id', 'study.referralId')
    .leftJoin('task', join => join.onRef('task.subjectId', '=', 'delivery.id').on('task.doneAt', 'is', null).on('task.kind', 'in', ['delivery-unacknowledged', 'delivery-bounced', 'delivery-uncertain', 'delivery-given-up', 'deliver-by-hand']))
    .leftJoin('user as owner', 'owner.id', 'task.ownerId')
    .select(deliveryColumns).select(['referral.urgency', 'delivery.sentAt', 'practice.phone', 'task.id as taskId', 'task.ownerId', 'owner.name as ownerName'])
    .where('delivery.siteId', 'in', siteIds).where('delivery.state', 'in', ['sent', 'failed', 'given-up', 'bounced', 'uncertain'])
    .where(eb => eb.or([eb('delivery.state', '<>', 'sent'), eb('delivery.acknowledgedAt', 'is', null)]))
    .where(sql<boolean>`NOT EXISTS (SELECT 1 FROM report_version later WHERE later.report_id = report_version.report_id AND later.version > report_version.version)`)
    .groupBy('delivery.id').orderBy('delivery.stateSince').limit(1000).execute()
  return rows.map(namedRow)
}
