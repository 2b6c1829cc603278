import type { Trx } from '#server/database/connection'
import { laterVersion } from '#server/database/queries/deliveries'
import type { OutboxMail } from '#server/database/tables/outbox-mail'
import { now, type ServiceContext } from './context'
import { moveState } from './move-state'
import { markUncertain, withdrawSuperseded, type Claimed } from './outbox-outcomes'

/** Longer than the longest attempt: while a lease runs, nobody else touches the mail. */
export const leaseMinutes = 5

const later = (context: ServiceContext, minutes: number) => new Date(context.clock().getTime() + minutes * 60_000).toISOString()

/** The hold is over: from now on it may leave at any moment. */
export async function releaseHeld(context: ServiceContext, most: number): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const held = await trx.selectFrom('outboxMail').select(['id', 'deliveryId']).where('state', '=', 'held').where('dueAt', '<=', now(context)).orderBy('dueAt').limit(most).execute()
    for (const { id, deliveryId } of held) {
      await trx.updateTable('outboxMail').set({ state: 'queued' }).where('id', '=', id).where('state', '=', 'held').execute()
      if (deliveryId) await moveState(context, trx, { subject: 'delivery', id: deliveryId, from: 'held', to: 'queued' })
    }
  })
}

/**
 * Mails whose process ended while it was sending. Before the last byte the server cannot have taken them, so they go
 * again; after it nobody can tell, so they are never sent again by themselves and become a task.
 */
export async function recoverInterrupted(context: ServiceContext): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const left = await trx.selectFrom('outboxMail').selectAll().where('state', '=', 'sending').where('leaseUntil', '<', now(context)).execute()
    for (const mail of left) {
      if (mail.lastByteAt) await markUncertain(context, trx, mail, 'the program ended between the last byte and the answer')
      else await sendAgain(context, trx, mail)
    }
  })
}

async function sendAgain(context: ServiceContext, trx: Trx, mail: OutboxMail): Promise<void> {
  await trx.updateTable('outboxMail').set({ state: 'failed', dueAt: now(context), leaseOwner: null, leaseUntil: null, lastError: 'interrupted before the last byte' }).where('id', '=', mail.id).execute()
  if (mail.deliveryId) await moveState(context, trx, { subject: 'delivery', id: mail.deliveryId, from: 'sending', to: 'failed', reason: 'interrupted before anything was accepted; it is tried again' })
}

/** Takes what is due for this process, each under a lease. A version that was replaced meanwhile stays here. */
export async function claimDue(context: ServiceContext, owner: string, most: number): Promise<Claimed[]> {
  return await context.db.transaction().execute(async (trx) => {
    const due = await trx.selectFrom('outboxMail').selectAll().where('state', 'in', ['queued', 'failed']).where('dueAt', '<=', now(context)).orderBy('dueAt').orderBy('id').limit(most).execute()
    const claimed: Claimed[] = []
    for (const mail of due) {
      const replacedBy = mail.deliveryId ? await laterVersion(trx, mail.deliveryId) : undefined
      if (replacedBy === undefined) claimed.push(await claim(context, trx, mail, owner))
      else await withdrawSuperseded(context, trx, mail, replacedBy)
    }
    return claimed
  })
}

async function claim(context: ServiceContext, trx: Trx, mail: OutboxMail, owner: string): Promise<Claimed> {
  const attempts = mail.attempts + 1
  await trx.updateTable('outboxMail').set({ state: 'sending', leaseOwner: owner, leaseUntil: later(context, leaseMinutes), lastByteAt: null, attempts }).where('id', '=', mail.id).execute()
  if (mail.deliveryId) {
    await moveState(context, trx, { subject: 'delivery', id: mail.deliveryId, from: ['queued', 'failed'], to: 'sending' })
    await trx.updateTable('delivery').set({ attempts }).where('id', '=', mail.deliveryId).execute()
  }
  return { ...mail, state: 'sending', attempts, leaseOwner: owner }
}
