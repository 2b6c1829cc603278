import { randomInt } from 'node:crypto'
import { sql } from 'kysely'
import type { Trx } from '#server/database/connection'
import type { Physician } from '#server/database/tables/physician'
import { DomainError } from '#shared/errors'
import { now, sitesWhere, type ServiceContext } from './context'
import { organisationDay } from './organisation-day'
import { queueMail } from './queue-mail'
import { recordAuditEvent } from './record-audit-event'
import { changeShared } from './shared-directory'

export const ADDRESS_CODE = 'verify-address'
export const codeHours = 72
/** Wrong codes until it is worth nothing: with 31^10 codes guessing has no hope. */
export const mostTries = 5
/** Letters and digits that are not taken for each other when they are read out. */
const alphabet = 'ABCDEFGHJKMNPQRSTUVWXYZ23456789'
const CODE_LENGTH = 10

export interface CodeData { physicianId: string, email: string, mailId: string, tries: number }

const makeCode = () => Array.from({ length: CODE_LENGTH }, () => alphabet[randomInt(alphabet.length)]).join('')
/** @example plainCode('abcde-fghjk') // => 'ABCDEFGHJK' */
const plainCode = (typed: string) => typed.toUpperCase().replace(/[^A-Z0-9]/g, '')
const hashOf = (context: ServiceContext, physicianId: string, code: string) => context.keys.tokenHash(`${ADDRESS_CODE}/${physicianId}/${code}`)

/**
 * Mails a code to the address of a physician; an earlier one stops working. The physician reads it out over the
 * telephone, and whoever called types it: so the mailbox and the voice are known to belong together. Only its hash is kept.
 * @param siteId the site whose telephone stands in the mail; the first of the actor's where it is left out
 * @throws DomainError 'not-found' · 'not-valid' when they left or the address is verified
 */
export async function sendAddressCode(context: ServiceContext, { physicianId, siteId }: { physicianId: string, siteId?: string }): Promise<void> {
  const today = await organisationDay(context)
  await context.db.transaction().execute(async (trx) => {
    const physician = await presentPhysician(trx, physicianId, today)
    if (physician.emailVerifiedAt !== null) throw new DomainError('not-valid', { message: 'This address is verified already.' })
    await endOpenCodes(context, trx, physicianId)
    const code = makeCode()
    const expiresAt = new Date(context.clock().getTime() + codeHours * 3_600_000).toISOString()
    const mailId = await queueMail(context, trx, { template: 'verify-address', toAddress: physician.email, data: { code: `${code.slice(0, 5)}-${code.slice(5)}`, hours: codeHours, ...await senderWords(context, trx, siteId) } })
    const data: CodeData = { physicianId, email: physician.email, mailId, tries: 0 }
    await trx.insertInto('oneTimeLink').values({ tokenHash: hashOf(context, physicianId, code), purpose: ADDRESS_CODE, userId: null, dataJson: JSON.stringify(data), createdAt: now(context), expiresAt, usedAt: null }).execute()
    await recordAuditEvent(context, trx, { name: 'physician.code-sent', subject: 'physician', subjectId: physicianId, data: { mailId } })
  })
}

async function presentPhysician(trx: Trx, id: string, today: string): Promise<Physician> {
  const physician = await trx.selectFrom('physician').innerJoin('practice', 'practice.id', 'physician.practiceId').selectAll('physician').select('practice.closedAt').where('physician.id', '=', id).executeTakeFirst()
  if (!physician) throw new DomainError('not-found')
  if (physician.closedAt !== null || (physician.leftOn !== null && physician.leftOn <= today)) throw new DomainError('not-valid', { message: 'This physician left the practice: nothing is sent there any more.' })
  return physician
}

async function senderWords(context: ServiceContext, trx: Trx, siteId: string | undefined) {
  const own = sitesWhere(context.actor, 'directory.write')
  const site = await trx.selectFrom('site').innerJoin('organisation', 'organisation.id', 'site.organisationId').select(['organisation.name as organisation', 'site.name as siteName', 'site.phone as sitePhone'])
    .where('site.id', 'in', siteId && own.includes(siteId) ? [siteId] : own).orderBy('site.name').executeTakeFirst()
  if (!site) throw new DomainError('not-allowed')
  return site
}

/** Codes on their way are worth nothing from now on, and a mail that has not left stays here. */
export async function endOpenCodes(context: ServiceContext, trx: Trx, physicianId: string): Promise<void> {
  for (const { tokenHash, dataJson } of await openCodes(trx, physicianId).execute()) {
    await trx.deleteFrom('oneTimeLink').where('tokenHash', '=', tokenHash).execute()
    await trx.updateTable('outboxMail').set({ state: 'withdrawn', dataSealed: '' }).where('id', '=', (JSON.parse(dataJson) as CodeData).mailId).where('state', 'in', ['queued', 'failed']).execute()
  }
}

/** Unused codes of a physician, past ones too. */
export function openCodes(db: Trx | ServiceContext['db'], physicianId: string) {
  return db.selectFrom('oneTimeLink').selectAll().where('purpose', '=', ADDRESS_CODE).where('usedAt', 'is', null).where(sql<string>`json_extract(data_json, '$.physicianId')`, '=', physicianId)
}

/**
 * Takes the code that the physician read out. It works once, for 72 hours, for the address that it was mailed to; after
 * five wrong ones it is worth nothing.
 * @throws DomainError 'not-found' · 'not-valid' with what to do
 */
export async function checkAddressCode(context: ServiceContext, physicianId: string, typed: string): Promise<void> {
  // The count of wrong codes has to stay although the answer is a refusal: so it is thrown after the transaction.
  const because = await context.db.transaction().execute(async (trx) => {
    const physician = await presentPhysician(trx, physicianId, await organisationDay({ db: trx, clock: context.clock }))
    const link = await openCodes(trx, physicianId).executeTakeFirst()
    const refusal = await refusalOf(context, trx, { physician, link, typed })
    if (refusal) await recordAuditEvent(context, trx, { name: 'physician.code-refused', subject: 'physician', subjectId: physicianId, data: { because: refusal } })
    else await markVerified(context, trx, physicianId, { by: 'code', reason: '' })
    return refusal
  })
  if (because) throw new DomainError('not-valid', { fields: [{ path: 'code', message: sentences[because] }] })
}

const sentences = {
  'no code': 'No code is on its way to this address. Send one first.',
  'too old': 'The code is older than 72 hours. Send a new one.',
  'wrong': 'This is not the code that was mailed. Let it be read out again.',
  'too many': 'The code was entered wrongly five times and is worth nothing now. Send a new one.',
} as const

interface Attempt { physician: Physician, link: Awaited<ReturnType<ReturnType<typeof openCodes>['executeTakeFirst']>>, typed: string }
async function refusalOf(context: ServiceContext, trx: Trx, { physician, link, typed }: Attempt): Promise<keyof typeof sentences | null> {
  if (!link) return 'no code'
  const data = JSON.parse(link.dataJson) as CodeData
  if (data.email !== physician.email) return 'no code'
  if (link.expiresAt <= now(context)) return 'too old'
  if (data.tries >= mostTries) return 'too many'
  if (link.tokenHash === hashOf(context, physician.id, plainCode(typed))) {
    await trx.updateTable('oneTimeLink').set({ usedAt: now(context) }).where('tokenHash', '=', link.tokenHash).execute()
    return null
  }
  const tries = data.tries + 1
  await trx.updateTable('oneTimeLink').set({ dataJson: JSON.stringify({ ...data, tries }) }).where('tokenHash', '=', link.tokenHash).execute()
  return tries >= mostTries ? 'too many' : 'wrong'
}

async function markVerified(context: ServiceContext, trx: Trx, physicianId: string, { by, reason }: { by: 'code' | 'other', reason: string }): Promise<void> {
  await trx.updateTable('physician').set({ emailVerifiedAt: now(context), emailVerifiedBy: by, emailVerifiedNote: reason }).where('id', '=', physicianId).execute()
  await recordAuditEvent(context, trx, { name: 'physician.address-verified', subject: 'physician', subjectId: physicianId, data: { by, reason } })
}

/**
 * The address was checked another way, which the reason describes: a letterhead, a visit, the register of the chamber.
 * @throws DomainError 'not-found' · 'not-valid' when they left
 */
export async function verifyOtherwise(context: ServiceContext, physicianId: string, reason: string): Promise<void> {
  const today = await organisationDay(context)
  await context.db.transaction().execute(async (trx) => {
    const { practiceId } = await presentPhysician(trx, physicianId, today)
    await changeShared(context, trx, practiceId, 'How the address of a physician was checked')
    await endOpenCodes(context, trx, physicianId)
    await markVerified(context, trx, physicianId, { by: 'other', reason })
  })
}
