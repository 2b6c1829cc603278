import { sql } from 'kysely'
import type { Urgency } from '#shared/schemas/referral'
import type { Database } from '../connection'

/** Bookings of a site between two moments, with whom they are for; cancelled ones are not there. */
export async function bookingsBetween(db: Database, { siteId, from, until }: { siteId: string, from: string, until: string }) {
  return await db.selectFrom('booking').innerJoin('referral', 'referral.id', 'booking.referralId').innerJoin('patient', 'patient.id', 'referral.patientId')
    .select(['booking.id as bookingId', 'referral.id as referralId', 'referral.number', 'referral.urgency', 'familyName', 'givenName', 'booking.state', 'room', 'technologistId', 'startsAt', 'endsAt'])
    .where('booking.siteId', '=', siteId).where('startsAt', '>=', from).where('startsAt', '<', until).where('booking.state', '<>', 'cancelled').orderBy('startsAt').orderBy('room').execute()
}

const rank = sql`CASE referral.urgency WHEN 'same-week' THEN 0 WHEN 'urgent' THEN 1 ELSE 2 END`

/** Referrals of a site that wait for a time, the most urgent and then the oldest first. */
export async function waitingForTime(db: Database, siteId: string, most: number) {
  const found = db.selectFrom('referral').where('referral.siteId', '=', siteId).where('referral.state', 'in', ['accepted', 'did-not-attend'])
  const { total } = await found.select(eb => eb.fn.countAll<number>().as('total')).executeTakeFirstOrThrow()
  const rows = await found.innerJoin('patient', 'patient.id', 'referral.patientId')
    .select(['referral.id as referralId', 'referral.number', 'referral.urgency', 'referral.state', 'stateSince', 'receivedAt', 'familyName', 'givenName'])
    .orderBy(rank).orderBy('receivedAt').orderBy('referral.id').limit(most).execute()
  return { total, rows: rows as (Omit<(typeof rows)[number], 'urgency' | 'state'> & { urgency: Urgency, state: 'accepted' | 'did-not-attend' })[] }
}

/** Spans in which rooms and technologists are taken. A technologist may be booked at another site too. */
export async function takenBetween(db: Database, { siteId, technologistIds, from, until }: { siteId: string, technologistIds: readonly string[], from: string, until: string }) {
  return await db.selectFrom('booking').select(['siteId', 'room', 'technologistId', 'startsAt', 'endsAt'])
    .where('state', 'in', ['booked', 'arrived']).where('startsAt', '>=', from).where('startsAt', '<', until)
    .where(eb => eb.or([eb('siteId', '=', siteId), eb('technologistId', 'in', technologistIds)])).execute()
}
