import { sql } from 'kysely'
import type { Database } from '../connection'
import { isLeft } from './directory'

/** The directory entries that an account stands for: those who left, and closed practices, no longer count. */
export async function entriesOfAccount(db: Database, userId: string, today: string) {
  return await db.selectFrom('physician').innerJoin('practice', 'practice.id', 'physician.practiceId').select(['physician.id', 'practice.name', 'practice.town'])
    .where('physician.userId', '=', userId).where(sql<boolean>`NOT (${isLeft(today)})`).orderBy('practice.name').execute()
}

/** A version counts as sent to someone once its hold is over, until its delivery is withdrawn. */
const notSent = ['held', 'withdrawn'] as const

export interface DeskWish { physicianIds: readonly string[], show: 'all' | 'open' | 'answered', page: number, pageSize: number }

/** Referrals of these physicians and those they get a copy of; drafts of the laboratory are not theirs to see. */
function own(db: Database, { physicianIds, show }: DeskWish) {
  return db.selectFrom('referral')
    .where(eb => eb.or([
      eb('referral.physicianId', 'in', physicianIds),
      eb('referral.id', 'in', eb.selectFrom('referralCopy').select('referralId').where('physicianId', 'in', physicianIds)),
    ]))
    .where('referral.state', 'not in', ['draft', 'entered-in-error'])
    .$if(show === 'answered', query => query.where('referral.state', '=', 'answered'))
    .$if(show === 'open', query => query.where('referral.state', 'not in', ['answered', 'declined', 'cancelled']))
}

export async function deskReferrals(db: Database, wish: DeskWish) {
  const { total } = await own(db, wish).select(eb => eb.fn.countAll<number>().as('total')).executeTakeFirstOrThrow()
  const rows = await own(db, wish).innerJoin('patient', 'patient.id', 'referral.patientId').innerJoin('site', 'site.id', 'referral.siteId')
    .select(['referral.id', 'referral.number', 'referral.state', 'stateSince', 'stateReason', 'urgency', 'clinicalQuestion as question', 'side', 'physicianId', 'bookingStartsAt', 'familyName', 'givenName', 'birthDate', 'site.name as siteName', 'site.phone as sitePhone', 'site.timeZone'])
    .select(eb => eb.exists(eb.selectFrom('referrerLetter').select(sql`1`.as('one')).whereRef('referrerLetter.referralId', '=', 'referral.id').where('kind', '=', 'information').where('closedAt', 'is', null).where('referral.state', '=', 'returned')).as('asked'))
    .orderBy('stateSince', 'desc').orderBy('referral.id').limit(wish.pageSize).offset((wish.page - 1) * wish.pageSize).execute()
  return { rows, total }
}

/** What was sent to these physicians, the latest version of each report first. */
function sentVersions(db: Database, physicianIds: readonly string[]) {
  return db.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').innerJoin('report', 'report.id', 'reportVersion.reportId').innerJoin('study', 'study.id', 'report.studyId')
    .where('delivery.physicianId', 'in', physicianIds).where('delivery.state', 'not in', notSent)
    .orderBy('reportVersion.version', 'desc').orderBy('delivery.createdAt', 'desc')
}

export async function deskReports(db: Database, physicianIds: readonly string[], referralIds: readonly string[]) {
  return await sentVersions(db, physicianIds).where('study.referralId', 'in', referralIds)
    .select(['study.referralId', 'report.id as reportId', 'report.number', 'reportVersion.version', 'reportVersion.status', 'reportVersion.signedAt', 'delivery.id as deliveryId', 'delivery.state as deliveryState', 'delivery.acknowledgedAt'])
    .select(eb => eb.exists(eb.selectFrom('reportVersion as newer').select(sql`1`.as('one')).whereRef('newer.reportId', '=', 'report.id').whereRef('newer.version', '>', 'reportVersion.version')).as('superseded'))
    .execute()
}

/** Versions of one report that were sent to these physicians, the latest first. */
export async function sentVersionsOf(db: Database, physicianIds: readonly string[], reportId: string) {
  return await sentVersions(db, physicianIds).where('report.id', '=', reportId).select(['reportVersion.id', 'reportVersion.version', 'study.siteId', 'study.patientId', 'delivery.id as deliveryId', 'delivery.state', 'delivery.acknowledgedAt']).execute()
}
