import type { Trx } from '#server/database/connection'
import { laterVersion, type DeliveryFacts } from '#server/database/queries/deliveries'
import { recipientById } from '#server/database/queries/recipients'
import { DomainError } from '#shared/errors'
import { now, type ServiceContext } from './context'
import { newToken } from './keys'
import { moveState } from './move-state'
import { queueMail } from './queue-mail'
import { localDate } from './site-time'
import { intactSnapshot } from './verify-version'

/**
 * Puts a delivery back into the outbox, to the address that the directory has now. The Message-ID stays: if it did arrive
 * the first time, the recipient's program can tell that it is the same mail.
 * @throws DomainError 'not-valid' when the recipient cannot be mailed, or a later version replaces this one
 */
export async function queueAgain(context: ServiceContext, trx: Trx, delivery: DeliveryFacts, reason: string): Promise<void> {
  const later = await laterVersion(trx, delivery.id)
  if (later !== undefined) throw new DomainError('not-valid', { fields: [{ path: 'outcome', message: `Version ${later} replaces this one: it would arrive after its correction. Send version ${later}, or settle this one another way.` }] })
  const site = await trx.selectFrom('site').select('timeZone').where('id', '=', delivery.siteId).executeTakeFirstOrThrow()
  const recipient = await recipientById(trx, delivery.physicianId, localDate(context.clock(), site.timeZone))
  if (!recipient?.reachable) throw new DomainError('not-valid', { fields: [{ path: 'outcome', message: `It cannot be mailed: ${recipient?.because ?? 'the recipient is not in the directory'}.` }] })
  await moveState(context, trx, { subject: 'delivery', id: delivery.id, from: ['sent', 'failed', 'given-up', 'bounced', 'uncertain'], to: 'queued', reason })
  // The words of a mail that exists say how the report comes: it stays so. A letter becomes what the practice chose.
  const method = delivery.method === 'collection-link' || delivery.method === 'encrypted-pdf' ? delivery.method : recipient.deliveryMethod
  await trx.updateTable('delivery').set({ address: recipient.email, practiceId: recipient.practiceId, method, attempts: 0 }).where('id', '=', delivery.id).execute()
  const again = await trx.updateTable('outboxMail').set({ state: 'queued', dueAt: now(context), attempts: 0, lastByteAt: null, toAddress: recipient.email }).where('deliveryId', '=', delivery.id).executeTakeFirst()
  if (again.numUpdatedRows === 0n) await firstMail(context, trx, delivery, { toAddress: recipient.email, method })
}

/** A delivery that could not be mailed at the signature has no mail yet. */
async function firstMail(context: ServiceContext, trx: Trx, delivery: DeliveryFacts, { toAddress, method }: { toAddress: string, method: 'encrypted-pdf' | 'collection-link' }): Promise<void> {
  const version = await trx.selectFrom('reportVersion').selectAll().where('id', '=', delivery.reportVersionId).executeTakeFirstOrThrow()
  const snapshot = intactSnapshot(version)
  const token = newToken()
  await trx.updateTable('delivery').set({ acknowledgeTokenHash: context.keys.tokenHash(token) }).where('id', '=', delivery.id).execute()
  await queueMail(context, trx, {
    template: 'report-ready', toAddress, deliveryId: delivery.id,
    data: { reportNumber: snapshot.number, version: snapshot.version, status: snapshot.status, organisation: snapshot.organisation.name, siteName: snapshot.site.name, sitePhone: snapshot.site.phone, acknowledgeToken: token, method },
  })
}
