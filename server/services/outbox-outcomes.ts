import type { Trx } from '#server/database/connection'
import { deliveryFacts, laterVersion, type DeliveryFacts } from '#server/database/queries/deliveries'
import type { OutboxMail } from '#server/database/tables/outbox-mail'
import type { SendOutcome } from '#server/email/transport'
import { now, type ServiceContext } from './context'
import { createTask } from './create-task'
import { moveState } from './move-state'
import { recordAuditEvent } from './record-audit-event'
import { writeTogether } from './write-together'

export type Claimed = OutboxMail

/** Minutes to wait after the first, second and third failure; after the fourth it is given up: 15 minutes, 2 and 24 hours. */
export const retryMinutes = [15, 120, 1440] as const

const about = (delivery: DeliveryFacts) => ({ subject: 'delivery', subjectId: delivery.id, siteId: delivery.siteId, patientId: delivery.patientId })
const named = (delivery: DeliveryFacts) => ({ number: delivery.number, version: delivery.version })
const taskSite = (delivery: DeliveryFacts) => ({ subject: 'delivery', subjectId: delivery.id, siteId: delivery.siteId, ownerRole: 'administrator' as const })

/**
 * Writes down what became of an attempt, if the lease is still this process's.
 * @returns false when it is not: someone else decided meanwhile, and nothing is changed
 */
export async function settleAttempt(context: ServiceContext, mail: Claimed, outcome: SendOutcome): Promise<boolean> {
  return await writeTogether(context.db, async (trx) => {
    const mine = await trx.selectFrom('outboxMail').select('id').where('id', '=', mail.id).where('state', '=', 'sending').where('leaseOwner', '=', mail.leaseOwner).executeTakeFirst()
    if (!mine) return false
    if (outcome.kind === 'accepted') await markSent(context, trx, mail)
    else if (outcome.kind === 'uncertain') await markUncertain(context, trx, mail, outcome.because)
    else await markFailed(context, trx, mail, outcome.because, outcome.kind === 'permanent')
    return true
  })
}

async function markSent(context: ServiceContext, trx: Trx, mail: Claimed): Promise<void> {
  const sentAt = now(context)
  await trx.updateTable('outboxMail').set({ state: 'sent', sentAt, leaseOwner: null, leaseUntil: null, lastError: '' }).where('id', '=', mail.id).execute()
  const delivery = mail.deliveryId ? await deliveryFacts(trx, mail.deliveryId) : undefined
  if (!delivery) return
  await moveState(context, trx, { subject: 'delivery', id: delivery.id, from: 'sending', to: 'sent' })
  await trx.updateTable('delivery').set({ sentAt }).where('id', '=', delivery.id).execute()
  await recordAuditEvent(context, trx, { name: 'delivery.sent', ...about(delivery), data: { ...named(delivery), physicianId: delivery.physicianId, attempt: mail.attempts } })
  // Someone can be quicker than this line: the button was pressed before the server's answer was written down.
  if (delivery.acknowledgedAt) await moveState(context, trx, { subject: 'delivery', id: delivery.id, from: 'sent', to: 'acknowledged' })
}

async function markFailed(context: ServiceContext, trx: Trx, mail: Claimed, because: string, permanent: boolean): Promise<void> {
  const later = mail.deliveryId ? await laterVersion(trx, mail.deliveryId) : undefined
  const wait = retryMinutes[mail.attempts - 1]
  const final = permanent || wait === undefined || later !== undefined
  const dueAt = final ? mail.dueAt : new Date(context.clock().getTime() + wait * 60_000).toISOString()
  await trx.updateTable('outboxMail').set({ state: final ? 'given-up' : 'failed', dueAt, leaseOwner: null, leaseUntil: null, lastError: because }).where('id', '=', mail.id).execute()
  const delivery = mail.deliveryId ? await deliveryFacts(trx, mail.deliveryId) : undefined
  if (!delivery) {
    if (final) await createTask(context, trx, { kind: 'mail-given-up', subject: 'outbox-mail', subjectId: mail.id, siteId: null, ownerRole: 'administrator', sentence: `The mail ${mail.messageId} could not be sent. Check the address in the directory.` })
    return
  }
  await moveState(context, trx, { subject: 'delivery', id: delivery.id, from: 'sending', to: final && later === undefined ? 'given-up' : 'failed', reason: because })
  await recordAuditEvent(context, trx, { name: 'delivery.failed', ...about(delivery), data: { ...named(delivery), attempt: mail.attempts, final } })
  if (later !== undefined) await withdrawSuperseded(context, trx, mail, later)
  else if (final) await createTask(context, trx, { kind: 'delivery-given-up', ...taskSite(delivery), sentence: `${delivery.number}, version ${delivery.version}, could not be mailed to ${delivery.recipient}, ${delivery.practiceName}. Check the address, then send it again or deliver it by hand.` })
}

/** What certainly did not leave and was replaced by a later version must not arrive after it. */
export async function withdrawSuperseded(context: ServiceContext, trx: Trx, mail: OutboxMail, later: number): Promise<void> {
  await trx.updateTable('outboxMail').set({ state: 'withdrawn', leaseOwner: null, leaseUntil: null }).where('id', '=', mail.id).execute()
  const delivery = mail.deliveryId ? await deliveryFacts(trx, mail.deliveryId) : undefined
  if (!delivery) return
  await moveState(context, trx, { subject: 'delivery', id: delivery.id, from: ['queued', 'failed'], to: 'withdrawn', reason: `superseded by version ${later}` })
  await recordAuditEvent(context, trx, { name: 'delivery.withdrawn', ...about(delivery), data: { ...named(delivery), wasSent: false } })
}

/** Never sent again by the program: only a person can find out, by the Message-ID, whether it arrived. */
export async function markUncertain(context: ServiceContext, trx: Trx, mail: OutboxMail, because: string): Promise<void> {
  await trx.updateTable('outboxMail').set({ state: 'uncertain', leaseOwner: null, leaseUntil: null, lastError: because }).where('id', '=', mail.id).execute()
  const delivery = mail.deliveryId ? await deliveryFacts(trx, mail.deliveryId) : undefined
  if (!delivery) {
    await createTask(context, trx, { kind: 'mail-uncertain', subject: 'outbox-mail', subjectId: mail.id, siteId: null, ownerRole: 'administrator', sentence: `It is not known whether the mail ${mail.messageId} left.` })
    return
  }
  await moveState(context, trx, { subject: 'delivery', id: delivery.id, from: 'sending', to: 'uncertain', reason: because })
  await recordAuditEvent(context, trx, { name: 'delivery.uncertain', ...about(delivery), data: { ...named(delivery), messageId: mail.messageId } })
  await createTask(context, trx, { kind: 'delivery-uncertain', ...taskSite(delivery), sentence: `It is not known whether ${delivery.number}, version ${delivery.version}, reached ${delivery.recipient}, ${delivery.practiceName}. Ask the mail server for ${mail.messageId}, or telephone the practice; then settle it under Dispatch.` })
}

/** The report's PDF could not be made: the mail waits, and a person looks. */
export async function taskForRendering(context: ServiceContext, mail: Claimed): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const delivery = mail.deliveryId ? await deliveryFacts(trx, mail.deliveryId) : undefined
    if (delivery) await createTask(context, trx, { kind: 'pdf-failed', ...taskSite(delivery), sentence: `The PDF of ${delivery.number}, version ${delivery.version}, could not be made or no longer fits its hash. Its mail waits and is tried again.` })
  })
}
