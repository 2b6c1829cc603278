import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import { mailableReferrer } from '#server/database/queries/letters'
import type { Referral } from '#server/database/tables/referral'
import type { ReferrerLetter } from '#server/database/tables/referrer-letter'
import { DomainError } from '#shared/errors'
import { now, type ServiceContext } from './context'
import { createTask } from './create-task'
import { newToken } from './keys'
import { organisationDay } from './organisation-day'
import { queueMail } from './queue-mail'
import { recordAuditEvent } from './record-audit-event'

/**
 * Letters to the referring physician: what is asked, or the advice with which a referral was declined. The mail brings
 * our number and a link; what it says stands behind the link and the patient's birth date.
 */
export const LETTER_LINK = 'referrer-letter'
export const letterDays = 30
const TASK = 'letter-by-hand'

type About = Pick<Referral, 'id' | 'number' | 'siteId' | 'patientId' | 'physicianId'>
const about = (referral: About) => ({ subject: 'referral', subjectId: referral.id, siteId: referral.siteId, patientId: referral.patientId })

/** Writes a letter and mails its link, in the transaction of what causes it. Whoever cannot be mailed is a task for the administrator. */
export async function writeLetter(context: ServiceContext, trx: Trx, referral: About, { kind, reasons = [], note }: { kind: ReferrerLetter['kind'], reasons?: readonly string[], note: string }): Promise<void> {
  const createdBy = context.actor.userId
  if (!createdBy) throw new DomainError('not-signed-in')
  const letter = await trx.insertInto('referrerLetter').values({
    id: randomUUID(), referralId: referral.id, kind, physicianId: referral.physicianId, reasonsJson: JSON.stringify(reasons), note, createdAt: now(context), createdBy,
    mailId: null, mailedAt: null, remindedAt: null, closedAt: null, closedBecause: null, answerJson: null, seenAt: null,
  }).returningAll().executeTakeFirstOrThrow()
  await mailLetter(context, trx, referral, letter)
}

async function mailLetter(context: ServiceContext, trx: Trx, referral: About, letter: ReferrerLetter): Promise<boolean> {
  const to = await mailableReferrer(trx, referral.physicianId, await organisationDay({ db: trx, clock: context.clock }))
  const reminder = letter.mailedAt !== null
  if (to.email === null) {
    const what = letter.kind === 'information' ? 'what is missing' : 'that it was declined, and the advice'
    await createTask(context, trx, { kind: TASK, subject: 'referral', subjectId: referral.id, siteId: referral.siteId, ownerRole: 'administrator', sentence: `${referral.number}: tell the referring physician by telephone or letter ${what}. It could not be mailed: ${to.because}.` })
    return false
  }
  const token = newToken()
  const expiresAt = new Date(context.clock().getTime() + letterDays * 86_400_000).toISOString()
  await trx.insertInto('oneTimeLink').values({ tokenHash: context.keys.tokenHash(token), purpose: LETTER_LINK, userId: null, dataJson: JSON.stringify({ letterId: letter.id }), createdAt: now(context), expiresAt, usedAt: null }).execute()
  const site = await trx.selectFrom('site').innerJoin('organisation', 'organisation.id', 'site.organisationId').select(['organisation.name as organisation', 'site.name as siteName', 'site.phone as sitePhone']).where('site.id', '=', referral.siteId).executeTakeFirstOrThrow()
  const mailId = await queueMail(context, trx, { template: 'referrer-letter', toAddress: to.email, data: { kind: letter.kind, number: referral.number, token, days: letterDays, reminder, ...site } })
  await trx.updateTable('referrerLetter').set({ mailId, physicianId: referral.physicianId, mailedAt: letter.mailedAt ?? now(context) }).where('id', '=', letter.id).execute()
  await recordAuditEvent(context, trx, { name: 'letter.mailed', ...about(referral), data: { letterId: letter.id, kind: letter.kind, reminder } })
  return true
}

/** The request for information that waits for its answer. */
export async function openRequest(trx: Pick<Trx, 'selectFrom'>, referralId: string): Promise<ReferrerLetter | undefined> {
  return await trx.selectFrom('referrerLetter').selectAll().where('referralId', '=', referralId).where('kind', '=', 'information').where('closedAt', 'is', null).orderBy('createdAt', 'desc').executeTakeFirst()
}

/**
 * Mails the link of an open request once more. Earlier links of it go on working, unless wrong birth dates had locked them.
 * @returns false when the physician cannot be mailed: then there is a task
 * @throws DomainError 'wrong-state' when nothing is asked
 */
export async function remindReferrer(context: ServiceContext, trx: Trx, referral: About): Promise<boolean> {
  const letter = await openRequest(trx, referral.id)
  if (!letter) throw new DomainError('wrong-state')
  if (letter.wrongBirths > 0) await trx.updateTable('referrerLetter').set({ wrongBirths: 0 }).where('id', '=', letter.id).execute()
  const mailed = await mailLetter(context, trx, referral, letter)
  if (mailed) await trx.updateTable('referrerLetter').set({ remindedAt: now(context), reminders: letter.reminders + 1 }).where('id', '=', letter.id).execute()
  return mailed
}

/** What is asked is no longer needed or was told another way; the link then says so. A mail that has not left stays here. */
export async function closeRequests(context: ServiceContext, trx: Trx, referralId: string, because: 'received' | 'withdrawn' | 'answered'): Promise<void> {
  const closed = await trx.updateTable('referrerLetter').set({ closedAt: now(context), closedBecause: because }).where('referralId', '=', referralId).where('kind', '=', 'information').where('closedAt', 'is', null).returning('mailId').execute()
  for (const { mailId } of closed) if (mailId) await trx.updateTable('outboxMail').set({ state: 'withdrawn', dataSealed: '' }).where('id', '=', mailId).where('state', 'in', ['queued', 'failed']).execute()
  await trx.updateTable('task').set({ doneAt: now(context), resolution: because === 'answered' ? 'answered by the referring practice' : 'no longer needed' }).where('subjectId', '=', referralId).where('kind', '=', TASK).where('doneAt', 'is', null).execute()
}

/** Somebody of the clinic has seen what came back: its mark goes. */
export async function noteAnswerSeen(context: ServiceContext, { id }: { id: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const referral = await trx.selectFrom('referral').select(['id', 'number', 'siteId', 'patientId', 'physicianId']).where('id', '=', id).executeTakeFirst()
    if (!referral) throw new DomainError('not-found')
    const seen = await trx.updateTable('referrerLetter').set({ seenAt: now(context) }).where('referralId', '=', id).where('closedBecause', '=', 'answered').where('seenAt', 'is', null).executeTakeFirst()
    if (seen.numUpdatedRows > 0n) await recordAuditEvent(context, trx, { name: 'letter.answer-seen', ...about(referral), data: {} })
  })
}
