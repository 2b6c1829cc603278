import { deliveryFacts, laterVersion } from '#server/database/queries/deliveries'
import { recipientById } from '#server/database/queries/recipients'
import { DomainError } from '#shared/errors'
import { now, type ServiceContext } from './context'
import { queueMail } from './queue-mail'
import { recordAuditEvent } from './record-audit-event'
import { linkUntil } from './link-age'
import { localDate } from './site-time'

/**
 * Lets the link of a mail work for 30 more days and tells the recipient so, at the address of the directory. It stays the
 * same link: whoever has the first mail can go on with it, and it still opens with the passphrase alone.
 * @throws DomainError 'not-found' · 'wrong-state' when it was withdrawn or never left · 'not-valid' when there is no link, a later version stands, or they cannot be mailed
 */
export async function renewLink(context: ServiceContext, id: string): Promise<{ until: string }> {
  return await context.db.transaction().execute(async (trx) => {
    const delivery = await deliveryFacts(trx, id)
    if (!delivery) throw new DomainError('not-found')
    if (delivery.method !== 'collection-link') throw new DomainError('not-valid', { message: 'This report was attached to its mail: there is no link to renew.' })
    if (!['sent', 'acknowledged', 'uncertain', 'bounced'].includes(delivery.state)) throw new DomainError('wrong-state', { details: { state: delivery.state } })
    const later = await laterVersion(trx, id)
    if (later !== undefined) throw new DomainError('not-valid', { message: `Version ${later} stands instead of this one and has a link of its own.` })
    const site = await trx.selectFrom('site').innerJoin('organisation', 'organisation.id', 'site.organisationId').select(['site.name', 'site.phone', 'site.timeZone', 'organisation.name as organisation']).where('site.id', '=', delivery.siteId).executeTakeFirstOrThrow()
    const recipient = await recipientById(trx, delivery.physicianId, localDate(context.clock(), site.timeZone))
    if (!recipient?.reachable) throw new DomainError('not-valid', { message: `They cannot be told: ${recipient?.because ?? 'the recipient is not in the directory'}.` })
    const mail = await trx.selectFrom('outboxMail').select('dataSealed').where('deliveryId', '=', id).executeTakeFirstOrThrow()
    const { acknowledgeToken } = JSON.parse(context.keys.unseal(mail.dataSealed)) as { acknowledgeToken: string }
    const linkRenewedAt = now(context)
    const until = linkUntil({ ...delivery, linkRenewedAt })
    await trx.updateTable('delivery').set({ linkRenewedAt }).where('id', '=', id).execute()
    await queueMail(context, trx, { template: 'link-renewed', toAddress: recipient.email, data: { reportNumber: delivery.number, version: delivery.version, until: localDate(new Date(until), site.timeZone), organisation: site.organisation, siteName: site.name, sitePhone: site.phone, acknowledgeToken } })
    await trx.updateTable('task').set({ doneAt: linkRenewedAt, doneBy: context.actor.userId, resolution: 'the link was renewed' }).where('subjectId', '=', id).where('kind', '=', 'link-asked').where('doneAt', 'is', null).execute()
    await recordAuditEvent(context, trx, { name: 'delivery.link-renewed', subject: 'delivery', subjectId: id, siteId: delivery.siteId, patientId: delivery.patientId, data: { number: delivery.number, version: delivery.version } })
    return { until }
  })
}
