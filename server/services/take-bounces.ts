import { createHash } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import { deliveryFacts, type DeliveryFacts } from '#server/database/queries/deliveries'
import type { OutboxMail } from '#server/database/tables/outbox-mail'
import { readBounceMailbox, type Taken } from '#server/email/bounce-mailbox'
import { readBounce, type FailureReport } from '#server/email/read-bounce'
import { now, type ServiceContext } from './context'
import { createTask } from './create-task'
import { moveState } from './move-state'
import { recordAuditEvent } from './record-audit-event'

/** One look into the mailbox of bounces; nothing without its setting. @throws when the mailbox cannot be read */
export async function takeBounces(context: ServiceContext): Promise<number> {
  if (!context.settings.bounceImapUrl) return 0
  return await readBounceMailbox(context.settings.bounceImapUrl, source => takeBounce(context, source))
}

/**
 * Takes one message of that mailbox. A report that a mail of ours failed for good makes the delivery "bounced" with a
 * task; the same report a second time changes nothing, and neither does a stranger's message.
 */
export async function takeBounce(context: ServiceContext, source: Buffer): Promise<Taken> {
  const reading = await readBounce(source)
  if (reading.kind === 'other') return 'done'
  if (reading.kind === 'unreadable') {
    await context.db.transaction().execute(trx => taskForUnread(context, trx, reading.id))
    return 'for-people'
  }
  return await context.db.transaction().execute(trx => takeFailure(context, trx, reading.report))
}

async function takeFailure(context: ServiceContext, trx: Trx, report: FailureReport): Promise<Taken> {
  const known = await trx.selectFrom('bounceReport').select('id').where('id', '=', report.id).executeTakeFirst()
  if (known) return 'done'
  const mail = await mailOf(trx, report)
  if (!mail) {
    await taskForUnread(context, trx, report.id)
    return 'for-people'
  }
  // The report can be quicker than the server's own answer is written down.
  if (mail.state === 'sending') return 'later'
  await trx.insertInto('bounceReport').values({ id: report.id, mailId: mail.id, status: report.status, diagnostic: report.diagnostic, at: now(context) }).execute()
  await markBounced(context, trx, mail, report)
  return 'done'
}

async function mailOf(trx: Trx, { messageIds, mailIds }: FailureReport): Promise<OutboxMail | undefined> {
  return await trx.selectFrom('outboxMail').selectAll().where(eb => eb.or([eb('messageId', 'in', messageIds), eb('id', 'in', mailIds)])).executeTakeFirst()
}

const reasonOf = ({ status, diagnostic }: FailureReport) => `came back${status ? ` (${status})` : ''}${diagnostic ? `: ${diagnostic}` : ''}`

async function markBounced(context: ServiceContext, trx: Trx, mail: OutboxMail, report: FailureReport): Promise<void> {
  const because = reasonOf(report)
  if (mail.state === 'sent' || mail.state === 'uncertain') await trx.updateTable('outboxMail').set({ state: 'bounced', lastError: because }).where('id', '=', mail.id).execute()
  const delivery = mail.deliveryId ? await deliveryFacts(trx, mail.deliveryId) : undefined
  if (!delivery) return await taskForOther(context, trx, mail, because)
  const moves = delivery.state === 'sent' || delivery.state === 'uncertain'
  if (moves) await moveState(context, trx, { subject: 'delivery', id: delivery.id, from: ['sent', 'uncertain'], to: 'bounced', reason: because })
  await recordAuditEvent(context, trx, { name: 'delivery.bounced', subject: 'delivery', subjectId: delivery.id, siteId: delivery.siteId, patientId: delivery.patientId, data: { number: delivery.number, version: delivery.version, status: report.status } })
  if (moves) await taskForDelivery(context, trx, delivery)
}

/** What was open about it says less than the report does. */
async function taskForDelivery(context: ServiceContext, trx: Trx, delivery: DeliveryFacts): Promise<void> {
  await trx.updateTable('task').set({ doneAt: now(context), resolution: 'it came back' }).where('subjectId', '=', delivery.id).where('kind', 'in', ['delivery-uncertain', 'delivery-unacknowledged']).where('doneAt', 'is', null).execute()
  await createTask(context, trx, { kind: 'delivery-bounced', subject: 'delivery', subjectId: delivery.id, siteId: delivery.siteId, ownerRole: 'administrator', sentence: `The mail with ${delivery.number}, version ${delivery.version}, to ${delivery.recipient}, ${delivery.practiceName}, came back as undeliverable. Telephone the practice, correct the address in the directory, then send it again or deliver it by hand.` })
}

async function taskForOther(context: ServiceContext, trx: Trx, mail: OutboxMail, because: string): Promise<void> {
  await createTask(context, trx, { kind: 'mail-bounced', subject: 'outbox-mail', subjectId: mail.id, siteId: null, ownerRole: 'administrator', sentence: `The mail ${mail.messageId} ${because.slice(0, 200)}. Check the address in the directory.` })
}

async function taskForUnread(context: ServiceContext, trx: Trx, id: string): Promise<void> {
  const subjectId = createHash('sha256').update(id).digest('hex').slice(0, 32)
  await createTask(context, trx, { kind: 'bounce-unread', subject: 'bounce', subjectId, siteId: null, ownerRole: 'administrator', sentence: 'A message in the mailbox of bounces could not be matched with a mail of ours. It is flagged there: read it, and settle the delivery under Dispatch if it is about one.' })
}
