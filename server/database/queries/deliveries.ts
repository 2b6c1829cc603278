import { sql } from 'kysely'
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
    .selectAll('delivery').select(['report.number', 'reportVersion.version', 'reportVersion.reportId', 'study.patientId', 'physician.name as recipient', 'practice.name as practiceName', 'practice.town', 'practice.passphraseSealed'])
    .where('delivery.id', '=', deliveryId).executeTakeFirst()
}
export type DeliveryFacts = NonNullable<Awaited<ReturnType<typeof deliveryFacts>>>

/** The version that replaces the one of this delivery, or undefined while that is the latest. */
export async function laterVersion(db: Database, deliveryId: string): Promise<number | undefined> {
  const row = await db.selectFrom('delivery').innerJoin('reportVersion as own', 'own.id', 'delivery.reportVersionId').innerJoin('reportVersion as later', join => join.onRef('later.reportId', '=', 'own.reportId').onRef('later.version', '>', 'own.version'))
    .select('later.version').where('delivery.id', '=', deliveryId).orderBy('later.version', 'desc').executeTakeFirst()
  return row?.version
}

/** A delivery with report, patient, site, recipient and mail, as lists show it. */
export function deliveryJoins(db: Database) {
  return db.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').innerJoin('report', 'report.id', 'reportVersion.reportId').innerJoin('study', 'study.id', 'report.studyId')
    .innerJoin('patient', 'patient.id', 'study.patientId').innerJoin('site', 'site.id', 'delivery.siteId').innerJoin('physician', 'physician.id', 'delivery.physicianId').innerJoin('practice', 'practice.id', 'delivery.practiceId')
    .leftJoin('outboxMail', 'outboxMail.deliveryId', 'delivery.id')
}
const eventsNamed = (name: string) => sql<number>`(SELECT count(*) FROM audit_event WHERE audit_event.subject = 'delivery' AND audit_event.subject_id = delivery.id AND audit_event.name = ${sql.lit(name)})`
export const deliveryColumns = [
  'delivery.id', 'report.id as reportId', 'report.number as reportNumber', 'reportVersion.version', 'reportVersion.status', 'familyName', 'givenName', 'recordNumber', 'site.name as siteName', 'physician.name as recipient', 'practice.name as practiceName', 'practice.town', 'delivery.address', 'method', 'delivery.state', 'delivery.stateSince', 'delivery.stateReason', 'delivery.attempts', 'messageId', 'study.referralId', 'study.id as studyId', 'delivery.acknowledgedAt',
  eventsNamed('delivery.page-opened').as('opened'), eventsNamed('delivery.collected').as('collected'),
  sql<string | null>`(SELECT coalesce(taker.name, practice_delegate.name) FROM audit_event LEFT JOIN physician AS taker ON taker.id = audit_event.data_json ->> '$.collector.id' LEFT JOIN practice_delegate ON practice_delegate.id = audit_event.data_json ->> '$.collector.id' WHERE audit_event.subject = 'delivery' AND audit_event.subject_id = delivery.id AND audit_event.name = 'delivery.collected' ORDER BY audit_event.seq DESC LIMIT 1)`.as('collectedBy'),
  // As server/services/link-age.ts counts it.
  sql<string | null>`CASE WHEN delivery.method = 'collection-link' AND delivery.sent_at IS NOT NULL THEN strftime('%Y-%m-%dT%H:%M:%fZ', max(coalesce(delivery.link_renewed_at, delivery.sent_at), delivery.sent_at), '+30 days') END`.as('linkUntil'),
  sql<string | null>`(SELECT id FROM incident WHERE incident.delivery_id = delivery.id)`.as('incidentId'),
  sql<string | null>`(SELECT json_object('means', means, 'told', told, 'at', at, 'readBack', read_back) FROM delivery_by_hand WHERE delivery_by_hand.delivery_id = delivery.id ORDER BY recorded_at DESC LIMIT 1)`.as('byHandJson'),
] as const

/** The patient's name in one, and what was delivered by hand read from its JSON. */
export function namedRow<R extends { familyName: string, givenName: string, byHandJson: string | null }>({ familyName, givenName, byHandJson, ...row }: R) {
  const hand = byHandJson === null ? null : JSON.parse(byHandJson) as { means: 'letter' | 'telephone' | 'in-person', told: string, at: string, readBack: number }
  return { ...row, patientName: `${familyName}, ${givenName}`, byHand: hand && { ...hand, readBack: hand.readBack === 1 } }
}

export interface DispatchWish { siteIds: string[], state?: DeliveryState }

/** Deliveries of these sites, the latest change first, with the count of each state. */
export async function dispatchPage(db: Database, wish: DispatchWish, { page, pageSize }: Pick<PageQuery, 'page' | 'pageSize'>): Promise<Page<DeliveryRow> & { counts: Partial<Record<DeliveryState, number>> }> {
  const perState = await db.selectFrom('delivery').where('siteId', 'in', wish.siteIds).select(['state']).select(eb => eb.fn.countAll<number>().as('count')).groupBy('state').execute()
  const counts = Object.fromEntries(perState.map(row => [row.state, row.count])) as Partial<Record<DeliveryState, number>>
  const total = wish.state ? counts[wish.state] ?? 0 : perState.reduce((sum, row) => sum + row.count, 0)
  const states = wish.state ? [wish.state] : perState.map(row => row.state)
  const ids = await newestFirst(db, { table: 'delivery', siteIds: wish.siteIds, states }, { page, pageSize })
  const rows = await deliveryJoins(db).where('delivery.id', 'in', ids).select(deliveryColumns).select('holdUntil').orderBy('delivery.stateSince', 'desc').orderBy('delivery.id').execute()
  return { rows: rows.map(namedRow), total, page, pageSize, counts }
}
