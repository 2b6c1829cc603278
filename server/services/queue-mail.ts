import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import { checkMailbox } from '#server/email/compose-mail'
import { mailTemplates, type MailData, type MailTemplate } from '#server/email/templates/index'
import { now, type ServiceContext } from './context'

export interface QueuedMail<T extends MailTemplate> {
  template: T
  toAddress: string
  data: MailData<T>
  /** The delivery that this mail carries out; it waits in "held" until `dueAt`. */
  deliveryId?: string
  /** Not before; now where it is left out. */
  dueAt?: string
}

/** @example mailDomain('Orthodrome <reports@orthodrome.example>') // => 'orthodrome.example' */
export const mailDomain = (mailFrom: string): string => /@([^\s<>]+)/.exec(mailFrom)?.[1] ?? 'localhost'

/**
 * Puts a mail into the outbox, in the transaction of what caused it: both happen or neither. Its data is sealed, its
 * Message-ID is made here and stays the same at every attempt.
 * @throws Error when the address is not one plain mailbox or the data does not fit the template
 */
export async function queueMail<T extends MailTemplate>(context: ServiceContext, trx: Trx, mail: QueuedMail<T>): Promise<string> {
  const id = randomUUID()
  const createdAt = now(context)
  const dueAt = mail.dueAt ?? createdAt
  const data = mailTemplates[mail.template].schema.parse(mail.data)
  await trx.insertInto('outboxMail').values({
    id, template: mail.template, deliveryId: mail.deliveryId ?? null, toAddress: checkMailbox(mail.toAddress), dataSealed: context.keys.seal(JSON.stringify(data)),
    messageId: `<${id}@${mailDomain(context.settings.mailFrom)}>`, state: mail.deliveryId && dueAt > createdAt ? 'held' : 'queued',
    dueAt, leaseOwner: null, leaseUntil: null, lastByteAt: null, sentAt: null, createdAt,
  }).execute()
  return id
}
