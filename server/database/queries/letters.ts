import { sql } from 'kysely'
import { askedBy } from '#shared/return-reasons'
import type { LetterAnswer, ReferralLetterView } from '#shared/schemas/letter'
import type { Database, Trx } from '../connection'
import { isLeft } from './directory'

/** Where the referring physician can be written to now; `because` says why not. A passphrase is not needed: the mail carries nothing. */
export async function mailableReferrer(db: Database | Trx, physicianId: string | null, today: string): Promise<{ email: string, because: '' } | { email: null, because: string }> {
  const row = physicianId === null
    ? undefined
    : await db.selectFrom('physician').innerJoin('practice', 'practice.id', 'physician.practiceId').select(['email', 'emailVerifiedAt', isLeft(today).as('left')]).where('physician.id', '=', physicianId).executeTakeFirst()
  const because = !row ? 'no physician is named' : row.left ? 'the physician left the practice' : row.emailVerifiedAt === null ? 'the address is not verified' : ''
  return because === '' && row ? { email: row.email, because } : { email: null, because }
}

/** Letters to the referring physician, the latest first, with what came back. */
export async function lettersOf(db: Database, referralId: string): Promise<ReferralLetterView[]> {
  const rows = await db.selectFrom('referrerLetter').innerJoin('user', 'user.id', 'referrerLetter.createdBy').leftJoin('physician', 'physician.id', 'referrerLetter.physicianId').leftJoin('outboxMail', 'outboxMail.id', 'referrerLetter.mailId')
    .selectAll('referrerLetter').select(['user.name as author', 'physician.name as physician', 'outboxMail.state as mailState'])
    .where('referralId', '=', referralId).orderBy('referrerLetter.createdAt', 'desc').execute()
  return rows.map(row => ({
    id: row.id, kind: row.kind, labels: askedBy(JSON.parse(row.reasonsJson) as string[]).labels, note: row.note, createdAt: row.createdAt, createdBy: row.author,
    mailedTo: row.mailedAt ? row.physician : null, mailState: row.mailState, reminders: row.reminders, remindedAt: row.remindedAt, closedAt: row.closedAt, closedBecause: row.closedBecause,
    answer: row.answerJson === null ? null : JSON.parse(row.answerJson) as LetterAnswer, seenAt: row.seenAt,
  }))
}

/** True while something that came back has not been noted by anybody. For a list of referrals. */
export const cameBack = sql<number>`EXISTS (SELECT 1 FROM referrer_letter WHERE referrer_letter.referral_id = referral.id AND referrer_letter.closed_because = 'answered' AND referrer_letter.seen_at IS NULL)`

/** When the link of the open request was last mailed; null when it never was. */
export async function lastReminded(db: Database, referralId: string): Promise<string | null> {
  const row = await db.selectFrom('referrerLetter').select(['mailedAt', 'remindedAt']).where('referralId', '=', referralId).where('kind', '=', 'information').where('closedAt', 'is', null).orderBy('createdAt', 'desc').executeTakeFirst()
  return row?.remindedAt ?? row?.mailedAt ?? null
}
