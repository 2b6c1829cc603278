import { randomUUID } from 'node:crypto'
import { RateLimiterMemory } from 'rate-limiter-flexible'
import type { Database } from '#server/database/connection'
import { DomainError } from '#shared/errors'
import type { AcknowledgeView } from '#shared/schemas/delivery'
import { deliveryOfToken, viewAcknowledge, type AcknowledgeInput } from './acknowledge-delivery'
import { actingAs, now, type ServiceContext } from './context'
import { createTask } from './create-task'
import { linkExpired } from './link-age'
import { recordAuditEvent } from './record-audit-event'

/** What somebody with the link of a mail can do besides acknowledging; each is limited for one delivery or one address. */
const limits = { openings: { points: 60, duration: 15 * 60 }, replies: { points: 5, duration: 24 * 3600 }, asking: { points: 10, duration: 15 * 60 } } as const
type LimitName = keyof typeof limits
const limiters = new WeakMap<Database, Record<LimitName, RateLimiterMemory>>()

async function spend(db: Database, name: LimitName, key: string): Promise<void> {
  const own = limiters.get(db) ?? Object.fromEntries(Object.entries(limits).map(([keyPrefix, options]) => [keyPrefix, new RateLimiterMemory({ keyPrefix, ...options })])) as Record<LimitName, RateLimiterMemory>
  limiters.set(db, own)
  await own[name].consume(key).catch(() => {
    throw new DomainError('too-many-requests')
  })
}

type Delivery = Awaited<ReturnType<typeof deliveryOfToken>>
const asRecipient = (context: ServiceContext) => actingAs(context, { userId: null, label: 'recipient, by the link of the mail', holdings: [] })
const about = (delivery: Pick<Delivery, 'id' | 'siteId' | 'patientId' | 'number' | 'version'>) => ({ subject: 'delivery', subjectId: delivery.id, siteId: delivery.siteId, patientId: delivery.patientId, data: { number: delivery.number, version: delivery.version } })

/**
 * Opens the page of a mail's link and notes it in the trail. It acknowledges nothing.
 * @throws DomainError as `viewAcknowledge`; 'too-many-requests' after 60 openings in 15 minutes
 */
export async function openLink(context: ServiceContext, input: AcknowledgeInput): Promise<AcknowledgeView> {
  const delivery = await deliveryOfToken(context, input)
  await spend(context.db, 'openings', delivery.id)
  await context.db.transaction().execute(trx => recordAuditEvent(asRecipient(context), trx, { name: 'delivery.page-opened', ...about(delivery) }))
  return await viewAcknowledge(context, input)
}

/**
 * "I think this is wrong": the recipient's words reach the signer as a task that names the version.
 * @throws DomainError 'not-found', 'too-many-requests' after five a day
 */
export async function replyToReport(context: ServiceContext, { words, fromName, ...input }: AcknowledgeInput & { words: string, fromName: string }): Promise<AcknowledgeView> {
  const delivery = await deliveryOfToken(context, input)
  await writeReply(asRecipient(context), delivery, { words, fromName })
  return await viewAcknowledge(context, input)
}

/** The words of a recipient, whichever way they came: the link of the mail or the desk. @throws DomainError 'too-many-requests' after five a day */
export async function writeReply(context: ServiceContext, delivery: Pick<Delivery, 'id' | 'siteId' | 'patientId' | 'number' | 'version' | 'reportVersionId'>, { words, fromName }: { words: string, fromName: string }): Promise<void> {
  await spend(context.db, 'replies', delivery.id)
  await context.db.transaction().execute(async (trx) => {
    const id = randomUUID()
    const signer = await trx.selectFrom('reportVersion').innerJoin('user', 'user.id', 'reportVersion.signedBy').select(['user.id', 'user.deactivatedAt']).where('reportVersion.id', '=', delivery.reportVersionId).executeTakeFirstOrThrow()
    await trx.insertInto('deliveryReply').values({ id, deliveryId: delivery.id, words, fromName, at: now(context), answeredAt: null, answeredBy: null }).execute()
    await createTask(context, trx, {
      kind: 'recipient-reply', subject: 'reply', subjectId: id, siteId: delivery.siteId, ...signer.deactivatedAt ? { ownerRole: 'neurologist' as const } : { ownerId: signer.id },
      sentence: `A recipient thinks that something in ${delivery.number}, version ${delivery.version}, is wrong. Read what they write, answer them by telephone, and correct the report if they are right.`,
      dueAt: new Date(context.clock().getTime() + 24 * 3_600_000).toISOString(),
    })
    await recordAuditEvent(context, trx, { name: 'delivery.replied', ...about(delivery) })
  })
}

/**
 * Asks for a collection link that is too old to be renewed. The answer is the same for every link, known or not; a task
 * comes of it only where there is something to renew.
 * @throws DomainError 'too-many-requests' after ten from one address in 15 minutes
 */
export async function askForLink(context: ServiceContext, input: AcknowledgeInput): Promise<{ asked: true }> {
  await spend(context.db, 'asking', input.address)
  const delivery = await deliveryOfToken(context, input).catch((error: unknown) => {
    if (error instanceof DomainError && error.code === 'not-found') return undefined
    throw error
  })
  if (delivery && delivery.method === 'collection-link' && delivery.state !== 'withdrawn' && linkExpired(context, delivery)) {
    await context.db.transaction().execute(async (trx) => {
      await createTask(context, trx, { kind: 'link-asked', subject: 'delivery', subjectId: delivery.id, siteId: delivery.siteId, ownerRole: 'administrator', sentence: `The recipient of ${delivery.number}, version ${delivery.version}, asks for its link to be renewed: it was open for 30 days. Telephone the practice if in doubt, then renew it under Dispatch.` })
      await recordAuditEvent(asRecipient(context), trx, { name: 'delivery.link-asked', ...about(delivery) })
    })
  }
  return { asked: true }
}
