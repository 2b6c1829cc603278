import type { Page, PageQuery } from '#shared/schemas/common'
import type { DeliveryRow } from '#shared/schemas/delivery'
import type { DeliveryState } from '#shared/states'
import type { Database } from '../connection'
import { newestFirst } from './newest-first'

export async function siteOfDelivery(db: Database, deliveryId: string): Promise<string | null> {
  const row = await db.selectFrom('delivery').select('siteId').where('id', '=', deliveryId).executeTakeFirst()
  return row?.siteId ?? null
}

/** A delivery with what its mail, its audit events and its tasks need to name it. */
export async function deliveryFacts(db: Database, deliveryId: string) {
  return await db.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').innerJoin('report', 'report.id', 'reportVersion.reportId')
    .innerJoin('study', 'study.id', 'report.studyId').innerJoin('physician', 'physician.id', 'delivery.physicianId').innerJoin('practice', 'practice.id', 'delivery.practiceId')
    .selectAll('delivery').select(['report.number', 'reportVersion.version', 'reportVersion.reportId', 'study.patientId', 'physician.name as recipient', 'practice.name as practiceName', 'practice.passphraseSealed'])
    .where('delivery.id', '=', deliveryId).executeTakeFirst()
}
export type DeliveryFacts = NonNullable<Awaited<ReturnType<typeof deliveryFacts>>>

/** The version that replaces the one of this delivery, or undefined while that is the latest. */
export async function laterVersion(db: Database, deliveryId: string): Promise<number | undefined> {
  const row = await db.selectFrom('delivery').innerJoin('reportVersion as own', 'own.id', 'delivery.reportVersionId').innerJoin('reportVersion as later', join => join.onRef('later.reportId', '=', 'own.reportId').onRef('later.version', '>', 'own.version'))
    .select('later.version').where('delivery.id', '=', deliveryId).orderBy('later.version', 'desc').executeTakeFirst()
  return row?.version
}

export interface DispatchWish { siteIds: string[], state?: DeliveryState }

/** Deliveries of these sites, the latest change first, with the count of each state. */
export async function dispatchPage(db: Database, wish: DispatchWish, { page, pageSize }: Pick<PageQuery, 'page' | 'pageSize'>): Promise<Page<DeliveryRow> & { counts: Partial<Record<DeliveryState, number>> }> {
  const perState = await db.selectFrom('delivery').where('siteId', 'in', wish.siteIds).select(['state']).select(eb => eb.fn.countAll<number>().as('count')).groupBy('state').execute()
  const counts = Object.fromEntries(perState.map(row => [row.state, row.count])) as Partial<Record<DeliveryState, number>>
  const total = wish.state ? counts[wish.state] ?? 0 : perState.reduce((sum, row) => sum + row.count, 0)
  const states = wish.state ? [wish.state] : perState.map(row => row.state)
  const ids = await newestFirst(db, { table: 'delivery', siteIds: wish.siteIds, states }, { page, pageSize })
  const rows = await db.selectFrom('delivery').where('delivery.id', 'in', ids)
    .innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').innerJoin('report', 'report.id', 'reportVersion.reportId').innerJoin('study', 'study.id', 'report.studyId')
    .innerJoin('patient', 'patient.id', 'study.patientId').innerJoin('site', 'site.id', 'delivery.siteId').innerJoin('physician', 'physician.id', 'delivery.physicianId').innerJoin('practice', 'practice.id', 'delivery.practiceId')
    .leftJoin('outboxMail', 'outboxMail.deliveryId', 'delivery.id')
    .select(['delivery.id', 'report.id as reportId', 'report.number as reportNumber', 'reportVersion.version', 'reportVersion.status', 'familyName', 'givenName', 'recordNumber', 'site.name as siteName', 'physician.name as recipient', 'practice.name as practiceName', 'practice.town', 'delivery.address', 'method', 'delivery.state', 'delivery.stateSince', 'delivery.stateReason', 'holdUntil', 'delivery.attempts', 'messageId', 'study.referralId', 'study.id as studyId'])
    .orderBy('delivery.stateSince', 'desc').orderBy('delivery.id').execute()
  return { rows: rows.map(({ familyName, givenName, ...row }) => ({ ...row, patientName: `${familyName}, ${givenName}` })), total, page, pageSize, counts }
}
