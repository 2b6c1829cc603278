import { chaseUnacknowledged } from '#server/services/chase'
import { replyToReport } from '#server/services/answer-link'
import { answerReply } from '#server/services/answer-reply'
import { withdrawDelivery } from '#server/services/change-delivery'
import { actingAs, systemActor } from '#server/services/context'
import { changeIncident, closeIncident, viewIncident } from '#server/services/incidents'
import { takeBounce } from '#server/services/take-bounces'
import { incidentSchema } from '#shared/schemas/incident'
import { statusReport } from '../status-report.mjs'
import { as, type Maker } from './make-study'

interface Sent { id: string, siteId: string, messageId: string, address: string, dataSealed: string, sentAt: string | null }

/** Deliveries that left, the latest first; each story below takes one of its own. */
async function sentOnes({ context }: Maker): Promise<Sent[]> {
  return await context.db.selectFrom('delivery').innerJoin('outboxMail', 'outboxMail.deliveryId', 'delivery.id').select(['delivery.id', 'delivery.siteId', 'messageId', 'delivery.address', 'dataSealed', 'delivery.sentAt'])
    .where('delivery.state', 'in', ['sent', 'acknowledged']).where('delivery.sentAt', 'is not', null).orderBy('delivery.sentAt', 'desc').limit(12).execute()
}

/** What Dispatch looks like when something went wrong: an open incident, a closed one, a bounce, two replies, a chase list. */
export async function makeDispatchWork(maker: Maker, now: Date): Promise<void> {
  const { clock } = maker
  const ones = await sentOnes(maker)
  /** Some hours ago, and never before it left. */
  const story = async (one: Sent | undefined, hours: number, tell: (one: Sent) => Promise<unknown>) => {
    if (!one) return
    clock.set(new Date(Math.max(now.getTime() - hours * 3_600_000, Date.parse(one.sentAt ?? '') + 3_600_000)))
    await tell(one)
  }
  await story(ones[6], 120, one => closedIncident(maker, one))
  await story(ones[3], 26, one => openIncident(maker, one))
  await story(ones[4], 20, one => reply(maker, one, { words: 'The letter speaks of the left hand; the patient tells me that it is the right one.', answer: 'Telephoned: both hands were measured, and the findings are on the right. The left is named as unremarkable.' }))
  await story(ones[2], 20, one => reply(maker, one, { words: 'The height of my patient is 172 cm, not as it stands in the report. Does that change a limit?' }))
  await story(ones[5], 3, one => takeBounce(actingAs(maker.context, systemActor), Buffer.from(statusReport({ raw: Buffer.from(`Message-ID: ${one.messageId}\r\n\r\n`), to: one.address, diagnostic: 'smtp; 552 5.2.2 mailbox full', status: '5.2.2' }))))
  clock.set(now)
  await chaseUnacknowledged(actingAs(maker.context, systemActor))
}

async function openIncident(maker: Maker, { id, siteId }: Sent): Promise<string | null> {
  const { incidentId } = await withdrawDelivery(await as(maker, 'administrator', siteId), { id, reason: 'Sent to a colleague of the same name in another practice' })
  return incidentId
}

async function closedIncident(maker: Maker, sent: Sent): Promise<void> {
  const context = await as(maker, 'administrator', sent.siteId)
  const id = await openIncident(maker, sent)
  if (!id) return
  maker.clock.forward(90)
  const view = await viewIncident(context, id)
  const { revision } = await changeIncident(context, { id, revision: view.revision, ...incidentSchema.parse(view), contactName: 'The practice manager', contactAt: maker.clock.read().toISOString(), contactMeans: 'telephone', contactWords: 'They saw that it was not their patient, deleted mail and PDF, and confirm it by letter.', deletionConfirmed: true, decision: 'nobody', decisionReason: 'Seen by one physician who is bound to secrecy, deleted, confirmed in writing; decided with the privacy officer.' })
  maker.clock.forward(60)
  await closeIncident(context, { id, revision })
}

async function reply(maker: Maker, { id, siteId, dataSealed }: Sent, { words, answer }: { words: string, answer?: string }): Promise<void> {
  const { acknowledgeToken } = JSON.parse(maker.context.keys.unseal(dataSealed)) as { acknowledgeToken: string }
  await replyToReport(actingAs(maker.context, systemActor), { token: acknowledgeToken, address: 'demonstration', words, fromName: '' })
  if (!answer) return
  const made = await maker.context.db.selectFrom('deliveryReply').select('id').where('deliveryId', '=', id).executeTakeFirstOrThrow()
  maker.clock.forward(120)
  await answerReply(await as(maker, 'neurologist', siteId), { id: made.id, answer })
}
