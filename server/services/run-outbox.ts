import { deliveryFacts } from '#server/database/queries/deliveries'
import { recipientById } from '#server/database/queries/recipients'
import { composeMail } from '#server/email/compose-mail'
import { renderMail } from '#server/email/templates/index'
import { signDkim } from '#server/email/sign-dkim'
import type { MailTransport, SendOutcome } from '#server/email/transport'
import { encryptPdf } from '#server/pdf/encrypt-pdf'
import { now, type ServiceContext } from './context'
import { reportPdf } from './make-report-pdf'
import { claimDue, recoverInterrupted, releaseHeld } from './outbox-claims'
import { settleAttempt, taskForRendering, type Claimed } from './outbox-outcomes'
import { localDate } from './site-time'
import { writeTogether } from './write-together'

export interface OutboxDeps {
  transport: MailTransport
  /** Names this process: a lease belongs to one. */
  owner: string
  /** Mails taken in one go, and how many of them are on the wire at once. */
  batch?: number
  parallel?: number
}

export interface OutboxCount { accepted: number, temporary: number, permanent: number, uncertain: number }

/**
 * One round of the outbox: releases what was held long enough, settles what an ended process left behind, and sends what
 * is due. Run again and again by plugins/2.outbox.ts; in tests with a clock and a server of their own.
 */
export async function runOutboxOnce(context: ServiceContext, { transport, owner, batch = 50, parallel = 5 }: OutboxDeps): Promise<OutboxCount> {
  await releaseHeld(context, batch)
  await recoverInterrupted(context)
  const waiting = await claimDue(context, owner, batch)
  const count: OutboxCount = { accepted: 0, temporary: 0, permanent: 0, uncertain: 0 }
  const work = async () => {
    for (let mail = waiting.shift(); mail; mail = waiting.shift()) count[await sendOne(context, transport, mail)]++
  }
  await Promise.all(Array.from({ length: parallel }, work))
  return count
}

async function sendOne(context: ServiceContext, transport: MailTransport, mail: Claimed): Promise<SendOutcome['kind']> {
  const outcome = await attempt(context, transport, mail)
  const written = await settleSurely(context, mail, outcome)
  if (!written) context.log.error({ mailId: mail.id, outcome: outcome.kind }, 'A mail was settled by another process meanwhile')
  else context.log.info({ mailId: mail.id, outcome: outcome.kind, attempt: mail.attempts }, 'A mail was tried')
  return outcome.kind
}

/**
 * Writing down what happened is tried three times. If even that fails, the lease runs out and the mail counts as
 * interrupted: sent again if its last byte never left, a task if it did.
 */
async function settleSurely(context: ServiceContext, mail: Claimed, outcome: SendOutcome): Promise<boolean> {
  for (let attemptNumber = 1; ; attemptNumber++) {
    try {
      return await settleAttempt(context, mail, outcome)
    }
    catch (error) {
      context.log.error({ mailId: mail.id, err: error }, 'The outcome of a mail could not be written')
      if (attemptNumber === 3) return false
    }
  }
}

async function attempt(context: ServiceContext, transport: MailTransport, mail: Claimed): Promise<SendOutcome> {
  const hindrance = await hindranceOf(context, mail)
  if (hindrance) return { kind: 'permanent', because: hindrance }
  let message: Buffer
  try {
    message = await messageOf(context, mail)
  }
  catch (error) {
    context.log.error({ mailId: mail.id, kind: (error as Error).name }, 'A mail could not be made')
    await taskForRendering(context, mail)
    return { kind: 'temporary', because: 'the message or its PDF could not be made' }
  }
  return await transport.send({ from: senderOf(context, mail.id), to: mail.toAddress, id: mail.id }, message, () => markLastByte(context, mail))
}

/**
 * What changed in the directory since the mail was queued and forbids it now: they left, the address changed or lost its
 * verification, the passphrase was replaced and not handed over yet. '' when nothing does. A missing passphrase is found
 * when the PDF is encrypted.
 */
async function hindranceOf(context: ServiceContext, mail: Claimed): Promise<string> {
  if (!mail.deliveryId) return ''
  const delivery = await context.db.selectFrom('delivery').innerJoin('site', 'site.id', 'delivery.siteId').innerJoin('practice', 'practice.id', 'delivery.practiceId')
    .select(['physicianId', 'site.timeZone', 'practice.passphraseSealed']).where('delivery.id', '=', mail.deliveryId).executeTakeFirstOrThrow()
  const recipient = await recipientById(context.db, delivery.physicianId, localDate(context.clock(), delivery.timeZone))
  if (!recipient) return 'the physician is not in the directory'
  if (!recipient.reachable && delivery.passphraseSealed !== null) return recipient.because
  return recipient.email.toLowerCase() === mail.toAddress.toLowerCase() ? '' : 'the address in the directory changed'
}

/**
 * Who stands in the envelope: reports of undeliverable mail go there.
 * @example senderOf({ settings: { mailFrom: 'Clinic <reports@clinic.example>', bounceAddress: 'back+*@clinic.example' } }, 'id') // => 'back+id@clinic.example'
 */
export function senderOf({ settings }: { settings: Pick<ServiceContext['settings'], 'mailFrom' | 'bounceAddress'> }, mailId = ''): string {
  if (settings.bounceAddress) return settings.bounceAddress.replace('*', mailId)
  return /<([^<>]+)>/.exec(settings.mailFrom)?.[1] ?? settings.mailFrom
}

/** @throws Error when the lease was lost: the attempt ends before anything can be accepted */
async function markLastByte(context: ServiceContext, mail: Claimed): Promise<void> {
  const marked = await writeTogether(context.db, trx => trx.updateTable('outboxMail').set({ lastByteAt: now(context) })
    .where('id', '=', mail.id).where('state', '=', 'sending').where('leaseOwner', '=', mail.leaseOwner).executeTakeFirst())
  if (marked.numUpdatedRows !== 1n) throw new Error('The lease of this mail was lost.')
}

async function messageOf(context: ServiceContext, mail: Claimed): Promise<Buffer> {
  const data: unknown = JSON.parse(context.keys.unseal(mail.dataSealed))
  const content = renderMail(mail.template, data, context.settings.appOrigin)
  const attachment = mail.deliveryId ? await attachmentOf(context, mail.deliveryId) : undefined
  const message = await composeMail({ from: context.settings.mailFrom, to: mail.toAddress, messageId: mail.messageId, date: context.clock(), content, ...(attachment ? { attachment } : {}) })
  return context.settings.dkim ? await signDkim(message, context.settings.dkim) : message
}

/** The stored PDF, encrypted anew with the practice's passphrase. Its name is the report's number and nothing else. */
async function attachmentOf(context: ServiceContext, deliveryId: string) {
  const delivery = await deliveryFacts(context.db, deliveryId)
  if (!delivery?.passphraseSealed) throw new Error('The practice has no passphrase: nothing is sent in clear.')
  // Made now in either case: a mail never says that a report is ready when its PDF cannot be made.
  const pdf = await reportPdf(context, delivery.reportVersionId)
  if (delivery.method === 'collection-link') return undefined
  const bytes = encryptPdf(pdf.bytes, context.keys.unseal(delivery.passphraseSealed))
  const suffix = delivery.version > 1 ? `-version-${delivery.version}` : ''
  return { filename: `${delivery.number}${suffix}.pdf`, bytes, contentType: 'application/pdf' as const }
}
