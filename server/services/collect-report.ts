import { timingSafeEqual } from 'node:crypto'
import { RateLimiterMemory } from 'rate-limiter-flexible'
import type { Database } from '#server/database/connection'
import { collectionDays } from '#server/email/templates/report-ready'
import { physiciansAt } from '#server/database/queries/directory'
import { DomainError } from '#shared/errors'
import type { Collector } from '#shared/schemas/delivery'
import { deliveryOfToken, type AcknowledgeInput } from './acknowledge-delivery'
import { actingAs, type ServiceContext } from './context'
import { linkExpired } from './link-age'
import { organisationDay } from './organisation-day'
import { reportPdf } from './make-report-pdf'
import { recordAuditEvent } from './record-audit-event'

/** Wrong passphrases for one delivery. */
const wrongOnes = { points: 10, duration: 15 * 60 }
const limiters = new WeakMap<Database, RateLimiterMemory>()

function limiterOf(db: Database): RateLimiterMemory {
  const found = limiters.get(db) ?? new RateLimiterMemory(wrongOnes)
  limiters.set(db, found)
  return found
}

/** Small letters and single spaces, so that it can be typed as it was written down. */
const plain = (words: string) => words.normalize('NFKC').toLowerCase().trim().split(/\s+/).join(' ')

export interface Collected { bytes: Uint8Array, number: string, version: number }

type CollectInput = AcknowledgeInput & { passphrase: string }

/**
 * Who may collect for the practice of a delivery, for whoever has its link and the passphrase: its physicians and those it
 * named. No name is told without the passphrase.
 * @throws DomainError as `collectReport`
 * @example await listCollectors(context, { token, address, passphrase }) // => [{ id, name: 'Dr Orla Whitcombe', duty: '' }, …]
 */
export async function listCollectors(context: ServiceContext, input: CollectInput): Promise<Collector[]> {
  const delivery = await openedDelivery(context, input)
  return (await collectorsOf(context, delivery)).map(({ id, name, duty }) => ({ id, name, duty }))
}

/**
 * Hands out the PDF of a delivery whose practice chose collection links, to whoever has the link and the passphrase and
 * says which of the people who may collect they are: the link came by mail, the passphrase another way. Each collection,
 * with who it was, and each refusal is in the trail.
 * @throws DomainError 'not-found' for an unknown link or a delivery that is not collected · 'link-used' after 30 days, when
 * withdrawn or superseded · 'not-valid' for the passphrase or the person · 'too-many-requests'
 */
export async function collectReport(context: ServiceContext, { collectorId, ...input }: CollectInput & { collectorId: string }): Promise<Collected> {
  const delivery = await openedDelivery(context, input)
  const collector = (await collectorsOf(context, delivery)).find(each => each.id === collectorId)
  if (!collector) {
    await refused(context, delivery, 'not among those who may collect')
    throw new DomainError('not-valid', { fields: [{ path: 'collectorId', message: 'This person may no longer collect for your practice. Telephone the laboratory.' }] })
  }
  // First the PDF: the trail never says that somebody collected what could not be made.
  const pdf = await reportPdf(context, delivery.reportVersionId)
  await collected(context, delivery, collector)
  return { bytes: pdf.bytes, number: delivery.number, version: delivery.version }
}

/** The delivery behind a link, once the passphrase was right. */
async function openedDelivery(context: ServiceContext, { passphrase, ...input }: CollectInput): Promise<Delivery> {
  const delivery = await deliveryOfToken(context, input)
  if (delivery.method !== 'collection-link' || !delivery.passphraseSealed) throw new DomainError('not-found')
  await checkOpen(context, delivery)
  const limiter = limiterOf(context.db)
  if (((await limiter.get(delivery.id))?.consumedPoints ?? 0) >= wrongOnes.points) throw new DomainError('too-many-requests')
  if (sameWords(context, plain(passphrase), plain(context.keys.unseal(delivery.passphraseSealed)))) return delivery
  await limiter.consume(delivery.id).catch(() => undefined)
  await refused(context, delivery, 'wrong passphrase')
  throw new DomainError('not-valid', { fields: [{ path: 'passphrase', message: 'This is not the passphrase of your practice. If it is lost, telephone the laboratory.' }] })
}

interface KnownCollector extends Collector { kind: 'physician' | 'delegate' }

/** Whom the report was sent to stands first. */
async function collectorsOf(context: ServiceContext, { practiceId, physicianId }: Delivery): Promise<KnownCollector[]> {
  const people = (await physiciansAt(context.db, [practiceId], await organisationDay(context))).filter(person => person.left === 0)
  const physicians = people.map(({ id, name }) => ({ id, name, duty: '', kind: 'physician' as const })).sort((one, other) => Number(other.id === physicianId) - Number(one.id === physicianId))
  const delegates = await context.db.selectFrom('practiceDelegate').select(['id', 'name', 'duty']).where('practiceId', '=', practiceId).where('endedAt', 'is', null).orderBy('name').execute()
  return [...physicians, ...delegates.map(delegate => ({ ...delegate, kind: 'delegate' as const }))]
}

type Delivery = Awaited<ReturnType<typeof deliveryOfToken>>

async function checkOpen(context: ServiceContext, delivery: Delivery): Promise<void> {
  if (delivery.state === 'withdrawn') throw new DomainError('link-used', { message: 'This report was withdrawn. Do not act on it; telephone the laboratory if you have questions.' })
  if (linkExpired(context, delivery)) throw new DomainError('link-used', { message: `The link worked for ${collectionDays} days. Ask for it to be renewed on this page, or telephone the laboratory named in the mail.` })
  const newer = await context.db.selectFrom('reportVersion').select('id').where('reportId', '=', delivery.reportId).where('version', '>', delivery.version).executeTakeFirst()
  if (newer) throw new DomainError('link-used', { message: 'A newer version stands instead of this one. Collect it by the link of its own mail.' })
}

/** Compared by their keyed hashes: equal in length, in constant time. */
function sameWords(context: ServiceContext, one: string, other: string): boolean {
  return timingSafeEqual(Buffer.from(context.keys.tokenHash(`passphrase/${one}`)), Buffer.from(context.keys.tokenHash(`passphrase/${other}`)))
}

const recipientOf = (context: ServiceContext) => actingAs(context, { userId: null, label: 'recipient, by the link of the mail', holdings: [] })
const aboutDelivery = ({ id, siteId, patientId }: Delivery) => ({ subject: 'delivery', subjectId: id, siteId, patientId })

async function collected(context: ServiceContext, delivery: Delivery, { kind, id }: KnownCollector): Promise<void> {
  const data = { number: delivery.number, version: delivery.version, collector: { kind, id } }
  await context.db.transaction().execute(trx => recordAuditEvent(recipientOf(context), trx, { name: 'delivery.collected', ...aboutDelivery(delivery), data }))
}

async function refused(context: ServiceContext, delivery: Delivery, because: string): Promise<void> {
  const data = { number: delivery.number, version: delivery.version, because }
  await context.db.transaction().execute(trx => recordAuditEvent(recipientOf(context), trx, { name: 'delivery.collect-refused', ...aboutDelivery(delivery), data }))
}
