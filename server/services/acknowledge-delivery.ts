import { RateLimiterMemory } from 'rate-limiter-flexible'
import type { Database, Trx } from '#server/database/connection'
import { DomainError } from '#shared/errors'
import type { AcknowledgeView } from '#shared/schemas/delivery'
import { actingAs, now, type ServiceContext } from './context'
import { linkExpired } from './link-age'
import { moveState } from './move-state'
import { recordAuditEvent } from './record-audit-event'

/** Wrong links from one address. A right one costs nothing: a whole practice sits behind one address. */
const wrongLinks = { points: 30, duration: 15 * 60 }
const limiters = new WeakMap<Database, RateLimiterMemory>()

function limiterOf(db: Database): RateLimiterMemory {
  const found = limiters.get(db) ?? new RateLimiterMemory(wrongLinks)
  limiters.set(db, found)
  return found
}

export interface AcknowledgeInput { token: string, /** where the call comes from */ address: string }

/** The delivery that a link stands for. @throws DomainError 'not-found', 'too-many-requests' */
export async function deliveryOfToken(context: ServiceContext, { token, address }: AcknowledgeInput) {
  const limiter = limiterOf(context.db)
  const used = await limiter.get(address)
  if (used && used.consumedPoints >= wrongLinks.points) throw new DomainError('too-many-requests')
  const delivery = await context.db.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').innerJoin('report', 'report.id', 'reportVersion.reportId')
    .innerJoin('study', 'study.id', 'report.studyId').innerJoin('site', 'site.id', 'delivery.siteId').innerJoin('organisation', 'organisation.id', 'site.organisationId').innerJoin('practice', 'practice.id', 'delivery.practiceId')
    .select(['delivery.id', 'delivery.state', 'delivery.siteId', 'delivery.method', 'delivery.createdAt', 'delivery.sentAt', 'delivery.linkRenewedAt', 'delivery.reportVersionId', 'delivery.practiceId', 'delivery.physicianId', 'practice.passphraseSealed', 'acknowledgedAt', 'report.id as reportId', 'report.number', 'reportVersion.version', 'organisation.name as organisation', 'study.patientId'])
    .where('acknowledgeTokenHash', '=', context.keys.tokenHash(token)).executeTakeFirst()
  if (delivery) return delivery
  await limiter.consume(address).catch(() => undefined)
  throw new DomainError('not-found', { message: 'This link is not known. Open it from the mail as it stands there, or telephone the laboratory.' })
}

/**
 * What the link of a mail shows: our number, nothing about the patient. Opening it changes nothing.
 * @throws DomainError 'not-found' for every link that is not known, 'too-many-requests'
 */
export async function viewAcknowledge(context: ServiceContext, input: AcknowledgeInput): Promise<AcknowledgeView> {
  const delivery = await deliveryOfToken(context, input)
  const newer = await context.db.selectFrom('reportVersion').select('id').where('reportId', '=', delivery.reportId).where('version', '>', delivery.version).executeTakeFirst()
  const { number, version, organisation, state, acknowledgedAt } = delivery
  const open = delivery.method === 'collection-link' && state !== 'withdrawn' && !newer
  const expired = open && linkExpired(context, delivery)
  const replies = await context.db.selectFrom('deliveryReply').select(['at', 'answeredAt']).where('deliveryId', '=', delivery.id).orderBy('at').execute()
  return { reportNumber: number, version, organisation, superseded: newer !== undefined, withdrawn: state === 'withdrawn', acknowledgedAt, expired, replies, collect: open && !expired }
}

/**
 * The button of that page: it arrived. A second press changes nothing, and so does a press on a withdrawn delivery.
 * @throws DomainError as `viewAcknowledge`
 */
export async function acknowledgeDelivery(context: ServiceContext, input: AcknowledgeInput): Promise<AcknowledgeView> {
  const delivery = await deliveryOfToken(context, input)
  const recipient = actingAs(context, { userId: null, label: 'recipient, by the link of the mail', holdings: [] })
  await context.db.transaction().execute(trx => acknowledgeIn(recipient, trx, delivery))
  return await viewAcknowledge(context, input)
}

/** Marks a delivery as arrived, in the transaction of whoever says so: the link of the mail or the desk. */
export async function acknowledgeIn(context: ServiceContext, trx: Trx, delivery: { id: string, siteId: string, patientId: string, number: string, version: number }): Promise<void> {
  const current = await trx.selectFrom('delivery').select(['state', 'acknowledgedAt']).where('id', '=', delivery.id).executeTakeFirstOrThrow()
  if (current.acknowledgedAt || current.state === 'withdrawn') return
  await trx.updateTable('delivery').set({ acknowledgedAt: now(context) }).where('id', '=', delivery.id).execute()
  // While it is being sent or sent again the outbox moves it on; in the other states it stands as it is for people.
  if (current.state === 'sent' || current.state === 'uncertain' || current.state === 'by-hand') await moveState(context, trx, { subject: 'delivery', id: delivery.id, from: ['sent', 'uncertain', 'by-hand'], to: 'acknowledged' })
  await trx.updateTable('task').set({ doneAt: now(context), resolution: 'acknowledged by the recipient' }).where('subjectId', '=', delivery.id).where('kind', 'in', ['delivery-uncertain', 'delivery-given-up', 'delivery-unacknowledged', 'delivery-bounced', 'deliver-by-hand']).where('doneAt', 'is', null).execute()
  await recordAuditEvent(context, trx, { name: 'delivery.acknowledged', subject: 'delivery', subjectId: delivery.id, siteId: delivery.siteId, patientId: delivery.patientId, data: { number: delivery.number, version: delivery.version } })
}
