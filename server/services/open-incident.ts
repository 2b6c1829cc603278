import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import type { DeliveryFacts } from '#server/database/queries/deliveries'
import { formatMoment } from '#shared/report/dates'
import { authorityHours } from '#shared/schemas/incident'
import type { DeliveryState } from '#shared/states'
import { now, type ServiceContext } from './context'
import { createTask } from './create-task'
import { recordAuditEvent } from './record-audit-event'

const howItCame = {
  'encrypted-pdf': (practice: string) => `attached as a PDF encrypted (AES-256) with the passphrase of ${practice}, which that practice has`,
  'collection-link': (practice: string) => `by a link that opens with the passphrase of ${practice}, which that practice has`,
  'letter': () => 'by letter', 'telephone': () => 'by telephone',
} as const

/**
 * Opens the record of a report that went to somebody it was not meant for: the four factors filled in from what the
 * program knows, a task with the shorter clock. Nothing that was sent is deleted: it is evidence.
 * @param before the state that the delivery was withdrawn from
 */
export async function openIncident(context: ServiceContext, trx: Trx, delivery: DeliveryFacts, { before, reason }: { before: DeliveryState, reason: string }): Promise<string> {
  const id = randomUUID()
  const at = now(context)
  const site = await trx.selectFrom('site').select('timeZone').where('id', '=', delivery.siteId).executeTakeFirstOrThrow()
  const seen = await seenOf(trx, delivery, { before, timeZone: site.timeZone })
  await trx.insertInto('incident').values({
    id, deliveryId: delivery.id, siteId: delivery.siteId, reason, awareAt: at, openedAt: at, openedBy: context.actor.userId,
    dataNature: `Report ${delivery.number}, version ${delivery.version}, of one patient: name, date of birth, record number, clinical question, measured values and impression; ${howItCame[delivery.method](delivery.practiceName)}.`,
    whoGotIt: `${delivery.recipient}, ${delivery.practiceName}, ${delivery.town}${delivery.method === 'letter' || delivery.method === 'telephone' ? '' : `, at ${delivery.address}`}; a practice of the directory.`,
    ...seen,
    mitigation: `Withdrawn ${formatMoment(at, site.timeZone)}: the link of the mail is closed, and its page asks for deletion.`,
    contactAt: null, contactMeans: null, decision: null, toldAt: null, closedAt: null, closedBy: null,
  }).execute()
  await recordAuditEvent(context, trx, { name: 'incident.opened', subject: 'delivery', subjectId: delivery.id, siteId: delivery.siteId, patientId: delivery.patientId, data: { number: delivery.number, version: delivery.version, incidentId: id } })
  await createTask(context, trx, {
    kind: 'incident', subject: 'incident', subjectId: id, siteId: delivery.siteId, ownerRole: 'administrator', dueAt: new Date(Date.parse(at) + authorityHours * 3_600_000).toISOString(),
    sentence: `${delivery.number}, version ${delivery.version}, was withdrawn after it went to ${delivery.recipient}, ${delivery.practiceName}. Telephone them, ask for deletion in writing, complete the record and decide who has to be told.`,
  })
  return id
}

const events = { 'delivery.page-opened': 'its page was opened', 'delivery.collected': 'the report was collected', 'delivery.acknowledged': 'receipt was acknowledged' } as const

/** Whether it was seen, as far as the trail tells. Opening the page alone proves nothing: mail scanners open links. */
async function seenOf(trx: Trx, delivery: DeliveryFacts, { before, timeZone }: { before: DeliveryState, timeZone: string }): Promise<{ viewed: 'no' | 'yes' | 'unknown', viewedWords: string }> {
  const found = await trx.selectFrom('auditEvent').where('subject', '=', 'delivery').where('subjectId', '=', delivery.id).where('name', 'in', Object.keys(events))
    .select(eb => ['name', eb.fn.countAll<number>().as('count'), eb.fn.max('at').as('last')]).groupBy('name').execute()
  const lines = Object.entries(events).flatMap(([name, what]) => found.filter(row => row.name === name).map(({ count, last }) => `${what} ${count === 1 ? 'once' : `${count} times, last`} ${formatMoment(last, timeZone)}`))
  const sent = before === 'bounced' ? 'The mail came back as undeliverable' : before === 'uncertain' ? 'It is not known whether the mail left' : delivery.sentAt ? `The mail was accepted by the mail server ${formatMoment(delivery.sentAt, timeZone)}` : 'It was delivered by hand'
  const certain = found.some(({ name }) => name !== 'delivery.page-opened')
  return { viewed: certain ? 'yes' : before === 'bounced' ? 'no' : 'unknown', viewedWords: `${[sent, ...lines].join('; ')}.` }
}
