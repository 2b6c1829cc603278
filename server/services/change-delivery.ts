import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import { deliveryFacts, type DeliveryFacts } from '#server/database/queries/deliveries'
import { DomainError } from '#shared/errors'
import type { ByHandInput } from '#shared/schemas/delivery'
import type { DeliveryState } from '#shared/states'
import { now, type ServiceContext } from './context'
import { moveState } from './move-state'
import { openIncident } from './open-incident'
import { recordAuditEvent } from './record-audit-event'
import { queueAgain } from './send-again'

const about = (delivery: DeliveryFacts) => ({ subject: 'delivery', subjectId: delivery.id, siteId: delivery.siteId, patientId: delivery.patientId })
const named = ({ number, version }: DeliveryFacts) => ({ number, version })

async function factsIn(trx: Trx, id: string): Promise<DeliveryFacts> {
  const delivery = await deliveryFacts(trx, id)
  if (!delivery) throw new DomainError('not-found')
  return delivery
}

/** Whatever was open about a delivery is settled with it. */
async function closeTasks(context: ServiceContext, trx: Trx, deliveryId: string, resolution: string): Promise<void> {
  await trx.updateTable('task').set({ doneAt: now(context), doneBy: context.actor.userId, resolution }).where('subjectId', '=', deliveryId).where('doneAt', 'is', null).execute()
}

/** Ends the hold at once. */
export async function sendDeliveryNow(context: ServiceContext, id: string): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const delivery = await factsIn(trx, id)
    await moveState(context, trx, { subject: 'delivery', id, from: 'held', to: 'queued' })
    await trx.updateTable('delivery').set({ holdUntil: now(context) }).where('id', '=', id).execute()
    await trx.updateTable('outboxMail').set({ state: 'queued', dueAt: now(context) }).where('deliveryId', '=', id).where('state', '=', 'held').execute()
    await recordAuditEvent(context, trx, { name: 'delivery.sent-now', ...about(delivery), data: named(delivery) })
  })
}

const withdrawable: readonly DeliveryState[] = ['held', 'queued', 'failed', 'given-up', 'sent', 'acknowledged', 'bounced', 'uncertain', 'by-hand']
const mayHaveArrived: readonly DeliveryState[] = ['sent', 'acknowledged', 'uncertain', 'bounced', 'by-hand']

/**
 * Takes a delivery back. Before it left nothing is sent; afterwards its page says that it is withdrawn, and an incident
 * is opened with its clocks.
 * @returns the id of the incident, null when nothing had left
 * @throws DomainError 'wrong-state' while it is on the wire
 */
export async function withdrawDelivery(context: ServiceContext, { id, reason }: { id: string, reason: string }): Promise<{ incidentId: string | null }> {
  return await context.db.transaction().execute(async (trx) => {
    const delivery = await factsIn(trx, id)
    if (delivery.state === 'sending') throw new DomainError('wrong-state', { message: 'It is being sent at this moment. Try again in a few seconds.', details: { state: delivery.state } })
    await moveState(context, trx, { subject: 'delivery', id, from: withdrawable, to: 'withdrawn', reason })
    await trx.updateTable('outboxMail').set({ state: 'withdrawn' }).where('deliveryId', '=', id).where('state', 'in', ['held', 'queued', 'failed', 'given-up', 'uncertain', 'bounced']).execute()
    await closeTasks(context, trx, id, `withdrawn: ${reason}`)
    const wasSent = mayHaveArrived.includes(delivery.state)
    await recordAuditEvent(context, trx, { name: 'delivery.withdrawn', ...about(delivery), data: { ...named(delivery), wasSent } })
    return { incidentId: wasSent ? await openIncident(context, trx, delivery, { before: delivery.state, reason }) : null }
  })
}

export type Settlement = 'arrived' | 'send-again' | 'by-hand'
/** "sent" is there too: nobody acknowledged it, and somebody followed it up. */
const unsettled: readonly DeliveryState[] = ['sent', 'uncertain', 'failed', 'given-up', 'bounced']
export interface Settling { id: string, outcome: Settlement, note: string, hand?: ByHandInput }

/**
 * A person settles what the program cannot: it arrived after all, it goes again, or it was delivered another way.
 * @throws DomainError 'wrong-state', 'not-valid' when it cannot be mailed or it is not said how it was delivered by hand
 */
export async function resolveDelivery(context: ServiceContext, { id, outcome, note, hand }: Settling): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const delivery = await factsIn(trx, id)
    if (!unsettled.includes(delivery.state)) throw new DomainError('wrong-state', { details: { state: delivery.state } })
    if (outcome === 'send-again') await queueAgain(context, trx, delivery, note)
    else if (outcome === 'by-hand') await deliveredByHand(context, trx, delivery, { note, hand })
    else await arrived(context, trx, delivery, note)
    await closeTasks(context, trx, id, `${outcome}: ${note}`)
    await recordAuditEvent(context, trx, { name: 'delivery.resolved', ...about(delivery), data: { ...named(delivery), outcome } })
  })
}

async function byHand(context: ServiceContext, trx: Trx, delivery: DeliveryFacts, reason: string): Promise<void> {
  await moveState(context, trx, { subject: 'delivery', id: delivery.id, from: unsettled, to: 'by-hand', reason })
  await trx.updateTable('outboxMail').set({ state: 'withdrawn' }).where('deliveryId', '=', delivery.id).where('state', 'in', ['failed', 'given-up', 'bounced', 'uncertain']).execute()
}

/** Who, when, how, and whether a result told by telephone was read back: kept for each time. */
async function deliveredByHand(context: ServiceContext, trx: Trx, delivery: DeliveryFacts, { note, hand }: { note: string, hand?: ByHandInput }): Promise<void> {
  const recordedBy = context.actor.userId
  if (!hand || !recordedBy) throw new DomainError('not-valid', { fields: [{ path: 'hand.told', message: 'Say how, to whom and when it was delivered.' }] })
  if (Date.parse(hand.at) > context.clock().getTime()) throw new DomainError('not-valid', { fields: [{ path: 'hand.at', message: 'This moment lies in the future.' }] })
  await trx.insertInto('deliveryByHand').values({ id: randomUUID(), deliveryId: delivery.id, means: hand.means, told: hand.told, at: new Date(hand.at).toISOString(), readBack: hand.readBack ? 1 : 0, note, recordedAt: now(context), recordedBy }).execute()
  await byHand(context, trx, delivery, note)
}

async function arrived(context: ServiceContext, trx: Trx, delivery: DeliveryFacts, reason: string): Promise<void> {
  const direct = delivery.state === 'uncertain' || delivery.state === 'sent'
  if (!direct) await byHand(context, trx, delivery, reason)
  else await trx.updateTable('outboxMail').set({ state: 'sent' }).where('deliveryId', '=', delivery.id).execute()
  await moveState(context, trx, { subject: 'delivery', id: delivery.id, from: ['sent', 'uncertain', 'by-hand'], to: 'acknowledged', reason })
  await trx.updateTable('delivery').set({ acknowledgedAt: now(context) }).where('id', '=', delivery.id).execute()
}
