import { timingSafeEqual } from 'node:crypto'
import { RateLimiterMemory } from 'rate-limiter-flexible'
import type { Database } from '#server/database/connection'
import { collectionDays } from '#server/email/templates/report-ready'
import { DomainError } from '#shared/errors'
import { deliveryOfToken, type AcknowledgeInput } from './acknowledge-delivery'
import { actingAs, type ServiceContext } from './context'
import { linkExpired } from './link-age'
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

/**
 * Hands out the PDF of a delivery whose practice chose collection links, to whoever has the link and the passphrase: the
 * link came by mail, the passphrase another way. Each collection and each refusal is in the trail.
 * @throws DomainError 'not-found' for an unknown link or a delivery that is not collected · 'link-used' after 30 days, when
 * withdrawn or superseded · 'not-valid' for the passphrase · 'too-many-requests'
 */
export async function collectReport(context: ServiceContext, { passphrase, ...input }: AcknowledgeInput & { passphrase: string }): Promise<Collected> {
  const delivery = await deliveryOfToken(context, input)
  if (delivery.method !== 'collection-link' || !delivery.passphraseSealed) throw new DomainError('not-found')
  await checkOpen(context, delivery)
  const limiter = limiterOf(context.db)
  if (((await limiter.get(delivery.id))?.consumedPoints ?? 0) >= wrongOnes.points) throw new DomainError('too-many-requests')
  const right = sameWords(context, plain(passphrase), plain(context.keys.unseal(delivery.passphraseSealed)))
  if (!right) await limiter.consume(delivery.id).catch(() => undefined)
  await note(context, delivery, right)
  if (!right) throw new DomainError('not-valid', { fields: [{ path: 'passphrase', message: 'This is not the passphrase of your practice. If it is lost, telephone the laboratory.' }] })
  const pdf = await reportPdf(context, delivery.reportVersionId)
  return { bytes: pdf.bytes, number: delivery.number, version: delivery.version }
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

async function note(context: ServiceContext, delivery: Delivery, right: boolean): Promise<void> {
  const recipient = actingAs(context, { userId: null, label: 'recipient, by the link of the mail', holdings: [] })
  const about = { subject: 'delivery', subjectId: delivery.id, siteId: delivery.siteId, patientId: delivery.patientId }
  const data = { number: delivery.number, version: delivery.version }
  await context.db.transaction().execute(trx => right
    ? recordAuditEvent(recipient, trx, { name: 'delivery.collected', ...about, data })
    : recordAuditEvent(recipient, trx, { name: 'delivery.collect-refused', ...about, data: { ...data, because: 'wrong passphrase' } }))
}
