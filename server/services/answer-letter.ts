import { RateLimiterMemory } from 'rate-limiter-flexible'
import { timingSafeEqual } from 'node:crypto'
import type { Database, Trx } from '#server/database/connection'
import { copiesOf, referralInputOf } from '#server/database/queries/referrals'
import type { Referral } from '#server/database/tables/referral'
import type { ReferrerLetter } from '#server/database/tables/referrer-letter'
import { DomainError, type FieldError } from '#shared/errors'
import { askedBy, completableFields, type Asked, type CompletableField } from '#shared/return-reasons'
import { cautions, referralSchema, type ReferralInput, type UploadView } from '#shared/schemas/referral'
import type { AnswerLetter, LetterAnswer, LetterView, OpenedLetter } from '#shared/schemas/letter'
import { actingAs, now, type ServiceContext } from './context'
import { closeRequests, LETTER_LINK } from './letters'
import { moveState } from './move-state'
import { recordAuditEvent } from './record-audit-event'
import { storeUpload } from './store-upload'
import { withdrawReady } from './withdraw-ready'

/** Wrong links from one address. A right one costs nothing: a whole practice sits behind one address. */
const wrongLinks = { points: 30, duration: 15 * 60 }
/** Wrong birth dates for one letter, until somebody sends its link again: 36,000 days cannot be guessed so. */
export const mostWrongBirths = 6
const limiters = new WeakMap<Database, RateLimiterMemory>()

function limiterOf(db: Database): RateLimiterMemory {
  const found = limiters.get(db) ?? new RateLimiterMemory(wrongLinks)
  limiters.set(db, found)
  return found
}

export interface LetterCall { token: string, /** where the call comes from */ address: string }
interface Found { letter: ReferrerLetter, referral: Referral }

const practice = (context: ServiceContext) => actingAs(context, { userId: null, label: 'referring practice, by the link of the mail', holdings: [] })
const about = ({ referral }: Found) => ({ subject: 'referral', subjectId: referral.id, siteId: referral.siteId, patientId: referral.patientId })

/** @throws DomainError 'not-found' · 'link-used' after its days · 'too-many-requests' */
async function letterOf(context: ServiceContext, { token, address }: LetterCall): Promise<Found> {
  const limiter = limiterOf(context.db)
  if (((await limiter.get(address))?.consumedPoints ?? 0) >= wrongLinks.points) throw new DomainError('too-many-requests')
  const link = await context.db.selectFrom('oneTimeLink').select(['dataJson', 'expiresAt']).where('tokenHash', '=', context.keys.tokenHash(token)).where('purpose', '=', LETTER_LINK).executeTakeFirst()
  const letter = link && await context.db.selectFrom('referrerLetter').selectAll().where('id', '=', (JSON.parse(link.dataJson) as { letterId: string }).letterId).executeTakeFirst()
  if (!link || !letter) {
    await limiter.consume(address).catch(() => undefined)
    throw new DomainError('not-found', { message: 'This link is not known. Open it from the mail as it stands there, or telephone the laboratory.' })
  }
  if (link.expiresAt <= now(context)) throw new DomainError('link-used', { message: 'This link is too old. Telephone the laboratory named in the mail; it sends a new one.' })
  const referral = await context.db.selectFrom('referral').selectAll().where('id', '=', letter.referralId).executeTakeFirstOrThrow()
  return { letter, referral }
}

function stateOf({ letter, referral }: Found): LetterView['state'] {
  if (letter.wrongBirths >= mostWrongBirths) return 'locked'
  if (letter.kind === 'advice') return referral.state === 'declined' ? 'open' : 'withdrawn'
  if (letter.closedBecause === 'answered') return 'done'
  return letter.closedAt === null && referral.state === 'returned' ? 'open' : 'withdrawn'
}

/** @example initialsOf({ givenName: 'Jana', familyName: 'Nováková' }) // => 'J. N.' */
export function initialsOf({ givenName, familyName }: { givenName: string, familyName: string }): string {
  return [givenName, familyName].map(name => [...name.trim()][0] ?? '').filter(Boolean).map(letter => `${letter.toUpperCase()}.`).join(' ')
}

/**
 * What the link of the mail shows: our number, initials, whom to call. Opening it changes nothing.
 * @throws DomainError as `letterOf`
 */
export async function viewLetter(context: ServiceContext, call: LetterCall): Promise<LetterView> {
  const found = await letterOf(context, call)
  const patient = await context.db.selectFrom('patient').select(['givenName', 'familyName']).where('id', '=', found.referral.patientId).executeTakeFirstOrThrow()
  const site = await context.db.selectFrom('site').innerJoin('organisation', 'organisation.id', 'site.organisationId').select(['organisation.name as organisation', 'site.name as siteName', 'site.phone as sitePhone']).where('site.id', '=', found.referral.siteId).executeTakeFirstOrThrow()
  return { kind: found.letter.kind, number: found.referral.number, initials: initialsOf(patient), state: stateOf(found), ...site }
}

/** Proves that the birth date was right, for the calls that follow; worth nothing for another link. */
const passOf = (context: ServiceContext, token: string) => context.keys.tokenHash(`${LETTER_LINK}/${token}`)

/** @throws DomainError 'not-allowed' */
export function checkPass(context: ServiceContext, { token, pass }: { token: string, pass: string }): void {
  const [given, right] = [pass, passOf(context, token)].map(text => Buffer.from(context.keys.tokenHash(`pass/${text}`)))
  if (!given || !right || !timingSafeEqual(given, right)) throw new DomainError('not-allowed', { message: 'Enter the patient\'s date of birth first.' })
}

function checkOpen(found: Found): void {
  if (stateOf(found) === 'locked') throw new DomainError('too-many-requests', { message: 'A wrong date of birth was entered too often. Telephone the laboratory named in the mail; it sends a new link.' })
  checkStands(found)
}

/** Still asked, whoever answers: wrong birth dates lock the link of the mail, not the desk. */
function checkStands(found: Found): void {
  const state = stateOf({ ...found, letter: { ...found.letter, wrongBirths: 0 } })
  if (state === 'done') throw new DomainError('wrong-state', { message: 'This was completed before. Nothing more is needed.' })
  if (state === 'withdrawn') throw new DomainError('wrong-state', { message: 'This is no longer needed: the laboratory has moved on with this referral. Telephone it if something has to be added.' })
}

/**
 * The page behind the link, for whoever knows the patient's date of birth.
 * @throws DomainError 'not-valid' for a wrong date · 'wrong-state' · 'too-many-requests' and as `letterOf`
 */
export async function openLetter(context: ServiceContext, { birthDate, ...call }: LetterCall & { birthDate: string }): Promise<OpenedLetter> {
  const found = await letterOf(context, call)
  checkOpen(found)
  const patient = await context.db.selectFrom('patient').select('birthDate').where('id', '=', found.referral.patientId).executeTakeFirstOrThrow()
  const right = patient.birthDate === birthDate
  await noteOpening(context, found, right)
  if (!right) throw new DomainError('not-valid', { fields: [{ path: 'birthDate', message: 'This is not the date of birth of the patient of this referral.' }] })
  return { pass: passOf(context, call.token), note: found.letter.note, ...await formOf(context, found) }
}

async function noteOpening(context: ServiceContext, found: Found, right: boolean): Promise<void> {
  const { letter } = found
  await context.db.transaction().execute(async (trx) => {
    if (!right) await trx.updateTable('referrerLetter').set(eb => ({ wrongBirths: eb('wrongBirths', '+', 1) })).where('id', '=', letter.id).execute()
    if (right && letter.kind === 'advice' && letter.closedAt === null) await trx.updateTable('referrerLetter').set({ closedAt: now(context), closedBecause: 'read' }).where('id', '=', letter.id).execute()
    await recordAuditEvent(practice(context), trx, right ? { name: 'letter.opened', ...about(found), data: { letterId: letter.id } } : { name: 'letter.refused', ...about(found), data: { letterId: letter.id, because: 'wrong date of birth' } })
  })
}

/** What is asked, with what stands: the same form behind the link of the mail and at the desk. */
export async function formOf(context: ServiceContext, { letter, referral }: Found): Promise<Pick<OpenedLetter, 'asked' | 'values' | 'uploads'>> {
  const asked = askedBy(JSON.parse(letter.reasonsJson) as string[])
  const stands = referralInputOf(referral, [])
  const uploads = await context.db.selectFrom('upload').select(['id', 'originalName', 'byteCount']).where('letterId', '=', letter.id).where('removedAt', 'is', null).orderBy('createdAt').execute()
  return { asked, values: Object.fromEntries(asked.fields.map(field => [field, stands[field]])), uploads }
}

const isBlank = (field: CompletableField, value: unknown): boolean => field === 'cautions'
  ? cautions.some(({ id }) => (id === 'cardiac-device' || id === 'temporary-pacing-wire') && ((value as ReferralInput['cautions'])[id] ?? 'not-asked') === 'not-asked')
  : value === null || value === '' || value === 'not-asked'

function checkAnswer(asked: Asked, values: Partial<ReferralInput>, words: string, files: number): void {
  const fields: FieldError[] = asked.needed.filter(field => isBlank(field, values[field])).map(field => ({ path: field, message: field === 'cautions' ? 'Answer at least for cardiac devices and external cardiac leads.' : field === 'side' ? 'Choose the side.' : `Enter: ${completableFields[field].toLowerCase()}.` }))
  if (asked.words && words === '') fields.push({ path: 'words', message: 'Answer the question.' })
  if (asked.file && files === 0) fields.push({ path: 'file', message: 'Add the letter or result.' })
  if (fields.length) throw new DomainError('not-valid', { fields })
}

/**
 * The referring practice completed what was asked: only those fields change, the referral is received again and shows
 * what came back.
 * @throws DomainError 'not-allowed' without the pass · 'not-valid' · 'wrong-state' when it was withdrawn meanwhile
 */
export async function answerLetter(context: ServiceContext, { pass, values, words, ...call }: LetterCall & AnswerLetter): Promise<void> {
  checkPass(context, { token: call.token, pass })
  const found = await letterOf(context, call)
  const { letter } = found
  if (letter.kind !== 'information') throw new DomainError('not-found')
  checkOpen(found)
  await practice(context).db.transaction().execute(trx => takeAnswer(practice(context), trx, letter.id, values, words))
}

/** In the transaction of whoever answers: the link of the mail or the desk. */
export async function takeAnswer(context: ServiceContext, trx: Trx, letterId: string, sent: AnswerLetter['values'], words: string): Promise<void> {
  const letter = await trx.selectFrom('referrerLetter').selectAll().where('id', '=', letterId).executeTakeFirstOrThrow()
  const referral = await trx.selectFrom('referral').selectAll().where('id', '=', letter.referralId).executeTakeFirstOrThrow()
  const found = { letter, referral }
  checkStands(found)
  const asked = askedBy(JSON.parse(letter.reasonsJson) as string[])
  const before = referralInputOf(referral, await copiesOf(trx, referral.id))
  const after = referralSchema.parse({ ...before, ...Object.fromEntries(asked.fields.flatMap(field => sent[field] === undefined ? [] : [[field, sent[field]]])) })
  const { files } = await trx.selectFrom('upload').select(eb => eb.fn.countAll<number>().as('files')).where('letterId', '=', letterId).where('removedAt', 'is', null).executeTakeFirstOrThrow()
  checkAnswer(asked, after, words, files)
  const changes = asked.fields.filter(field => JSON.stringify(before[field]) !== JSON.stringify(after[field])).map(field => ({ field, before: before[field], after: after[field] }))
  const { cautions: answers, ...plain } = Object.fromEntries(changes.map(({ field, after: value }) => [field, value])) as Partial<ReferralInput>
  await trx.updateTable('referral').set({ ...plain, ...(answers ? { cautionsJson: JSON.stringify(answers) } : {}), revision: referral.revision + 1 }).where('id', '=', referral.id).execute()
  await moveState(context, trx, { subject: 'referral', id: referral.id, from: 'returned', to: 'received', reason: 'the referring practice completed it' })
  await closeRequests(context, trx, referral.id, 'answered')
  await trx.updateTable('referrerLetter').set({ answerJson: JSON.stringify({ changes, words, files } satisfies LetterAnswer) }).where('id', '=', letterId).execute()
  if (changes.length) await recordAuditEvent(context, trx, { name: 'referral.changed', ...about(found), data: { changes: changes.map(({ field, before: value }) => ({ field, before: value })) } })
  await recordAuditEvent(context, trx, { name: 'letter.answered', ...about(found), data: { letterId, fields: changes.map(change => change.field), files } })
  if (changes.some(change => change.field === 'side')) await withdrawReady(context, trx, { referralId: referral.id })
}

/**
 * A letter or picture with the answer: checked as at intake, sealed, marked with the letter it came by.
 * @throws DomainError as `answerLetter` and `storeUpload`
 */
export async function addLetterFile(context: ServiceContext, { pass, name, bytes, ...call }: LetterCall & { pass: string, name: string, bytes: Uint8Array }): Promise<Pick<UploadView, 'id' | 'originalName' | 'byteCount'>> {
  checkPass(context, { token: call.token, pass })
  const found = await letterOf(context, call)
  if (found.letter.kind !== 'information') throw new DomainError('not-found')
  checkOpen(found)
  const { id, originalName, byteCount } = await storeUpload(practice(context), { referralId: found.referral.id, name, bytes, letterId: found.letter.id })
  return { id, originalName, byteCount }
}
