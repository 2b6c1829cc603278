import type { Trx } from '#server/database/connection'
import { deliveryFacts, type DeliveryFacts } from '#server/database/queries/deliveries'
import { DomainError } from '#shared/errors'
import type { DeliveryState } from '#shared/states'
import { now, type ServiceContext } from './context'
import { createTask } from './create-task'
import { moveState } from './move-state'
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

const withdrawable: readonly DeliveryState[] = ['held', 'queued', 'failed', 'given-up', 'sent', 'acknowledged', 'bounced', 'uncertain']
const mayHaveArrived: readonly DeliveryState[] = ['sent', 'acknowledged', 'uncertain', 'bounced']
const incidentHours = 72

/**
 * Takes a delivery back. Before it left nothing is sent; afterwards its page says that it is withdrawn, and the incident
 * becomes a task with a clock (72 hours is the shorter of the two legal ones; European rule, read).
 * @throws DomainError 'wrong-state' while it is on the wire
 */
export async function withdrawDelivery(context: ServiceContext, { id, reason }: { id: string, reason: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const delivery = await factsIn(trx, id)
    if (delivery.state === 'sending') throw new DomainError('wrong-state', { message: 'It is being sent at this moment. Try again in a few seconds.', details: { state: delivery.state } })
    await moveState(context, trx, { subject: 'delivery', id, from: withdrawable, to: 'withdrawn', reason })
    await trx.updateTable('outboxMail').set({ state: 'withdrawn' }).where('deliveryId', '=', id).where('state', 'in', ['held', 'queued', 'failed', 'given-up', 'uncertain', 'bounced']).execute()
    await closeTasks(context, trx, id, `withdrawn: ${reason}`)
    const wasSent = mayHaveArrived.includes(delivery.state)
    if (wasSent) await openIncident(context, trx, delivery)
    await recordAuditEvent(context, trx, { name: 'delivery.withdrawn', ...about(delivery), data: { ...named(delivery), wasSent } })
  })
}

async function openIncident(context: ServiceContext, trx: Trx, delivery: DeliveryFacts): Promise<void> {
  await createTask(context, trx, {
    kind: 'incident', subject: 'delivery', subjectId: delivery.id, siteId: delivery.siteId, ownerRole: 'administrator',
    dueAt: new Date(context.clock().getTime() + incidentHours * 3_600_000).toISOString(),
    sentence: `${delivery.number}, version ${delivery.version}, was withdrawn after it went to ${delivery.recipient}, ${delivery.practiceName}. Telephone, ask for deletion in writing, note what the report held, who got it, whether it was seen and what was done, and decide who has to be told.`,
  })
}

export type Settlement = 'arrived' | 'send-again' | 'by-hand'
const unsettled: readonly DeliveryState[] = ['uncertain', 'failed', 'given-up', 'bounced']

/**
 * A person settles what the program cannot: it arrived after all, it goes again, or it was delivered another way.
 * @throws DomainError 'wrong-state', 'not-valid' when it cannot be mailed
 */
export async function resolveDelivery(context: ServiceContext, { id, outcome, note }: { id: string, outcome: Settlement, note: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const delivery = await factsIn(trx, id)
    if (!unsettled.includes(delivery.state)) throw new DomainError('wrong-state', { details: { state: delivery.state } })
    if (outcome === 'send-again') await queueAgain(context, trx, delivery, note)
    else if (outcome === 'by-hand') await byHand(context, trx, delivery, note)
    else await arrived(context, trx, delivery, note)
    await closeTasks(context, trx, id, `${outcome}: ${note}`)
    await recordAuditEvent(context, trx, { name: 'delivery.resolved', ...about(delivery), data: { ...named(delivery), outcome } })
  })
}

async function byHand(context: ServiceContext, trx: Trx, delivery: DeliveryFacts, reason: string): Promise<void> {
  await moveState(context, trx, { subject: 'delivery', id: delivery.id, from: unsettled, to: 'by-hand', reason })
  await trx.updateTable('outboxMail').set({ state: 'withdrawn' }).where('deliveryId', '=', delivery.id).where('state', 'in', ['failed', 'given-up', 'bounced', 'uncertain']).execute()
}

async function arrived(context: ServiceContext, trx: Trx, delivery: DeliveryFacts, reason: string): Promise<void> {
  if (delivery.state !== 'uncertain') await byHand(context, trx, delivery, reason)
  else await trx.updateTable('outboxMail').set({ state: 'sent' }).where('deliveryId', '=', delivery.id).execute()
  await moveState(context, trx, { subject: 'delivery', id: delivery.id, from: ['uncertain', 'by-hand'], to: 'acknowledged', reason })
  await trx.updateTable('delivery').set({ acknowledgedAt: now(context) }).where('id', '=', delivery.id).execute()
}
