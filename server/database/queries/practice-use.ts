import type { Database, Trx } from '../connection'

/** The sites whose referrals name a physician of this practice, or that sent a report there: who is hurt when the entry is wrong. */
export async function sitesUsing(db: Database | Trx, practiceId: string): Promise<{ id: string, name: string }[]> {
  return await db.selectFrom('site').select(['site.id', 'site.name']).where(eb => eb.or([
    eb('site.id', 'in', eb.selectFrom('referral').innerJoin('physician', 'physician.id', 'referral.physicianId').where('physician.practiceId', '=', practiceId).select('referral.siteId')),
    eb('site.id', 'in', eb.selectFrom('referralCopy').innerJoin('physician', 'physician.id', 'referralCopy.physicianId').innerJoin('referral', 'referral.id', 'referralCopy.referralId').where('physician.practiceId', '=', practiceId).select('referral.siteId')),
    eb('site.id', 'in', eb.selectFrom('delivery').where('delivery.practiceId', '=', practiceId).select('delivery.siteId')),
  ])).orderBy('site.name').execute()
}

const underWay = ['draft', 'received', 'returned', 'accepted', 'booked', 'did-not-attend', 'attended'] as const

/** Referrals that are not answered yet and name this physician, and reports that were sent and not acknowledged (what waits to be sent becomes a task when its mail is due). */
export async function underWayFor(db: Database | Trx, physicianId: string) {
  const referrals = await db.selectFrom('referral').select(['id', 'number', 'siteId']).where('state', 'in', underWay)
    .where(eb => eb.or([eb('physicianId', '=', physicianId), eb('id', 'in', eb.selectFrom('referralCopy').select('referralId').where('physicianId', '=', physicianId))])).orderBy('number').execute()
  const deliveries = await db.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').innerJoin('report', 'report.id', 'reportVersion.reportId')
    .select(['delivery.id', 'report.number', 'delivery.siteId']).where('physicianId', '=', physicianId).where('state', '=', 'sent').orderBy('report.number').execute()
  return { referrals, deliveries }
}
