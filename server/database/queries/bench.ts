import { sql } from 'kysely'
import type { BenchRow } from '#shared/schemas/bench'
import type { Database } from '../connection'

interface Day { siteId: string, /** first moment of the day at the site */ from: string, /** first moment of the next */ until: string }

const columns = ['referral.id as referralId', 'familyName', 'givenName', 'birthDate', 'recordNumber', 'clinicalQuestion as question', 'urgency', 'study.id as studyId', 'study.state as studyState', 'study.stateSince as studySince', 'study.returnQuestion', 'startsAt', 'room', 'arrivedAt', 'study.createdAt as startedAt', 'technologist.name as technologistName'] as const

/** Who is booked at the site on the day, in order of time. */
function booked(db: Database, { siteId, from, until }: Day) {
  return db.selectFrom('booking').innerJoin('referral', 'referral.id', 'booking.referralId').innerJoin('patient', 'patient.id', 'referral.patientId')
    .leftJoin('study', join => join.onRef('study.referralId', '=', 'referral.id').on('study.state', '<>', 'entered-in-error').on('booking.state', '=', 'attended'))
    .leftJoin('user as technologist', 'technologist.id', 'booking.technologistId')
    .select(columns).select(['booking.id as bookingId', 'booking.state as bookingState', sql<string>`coalesce(booking.arrived_at, referral.state_since)`.as('since')])
    .where('booking.siteId', '=', siteId).where('startsAt', '>=', from).where('startsAt', '<', until).where('booking.state', '<>', 'cancelled')
    .orderBy('startsAt').orderBy('booking.id').execute()
}

/** Studies of other days that still wait at this bench: not finished, or come back with a question. */
function waiting(db: Database, siteId: string) {
  return db.selectFrom('study').innerJoin('referral', 'referral.id', 'study.referralId').innerJoin('patient', 'patient.id', 'referral.patientId')
    .leftJoin('booking', join => join.onRef('booking.referralId', '=', 'referral.id').on('booking.state', '=', 'attended'))
    .leftJoin('user as technologist', 'technologist.id', 'study.technologistId')
    .select(columns).select(['booking.id as bookingId', 'booking.state as bookingState', 'study.stateSince as since'])
    .where('study.siteId', '=', siteId).where('study.state', 'in', ['planned', 'recording', 'returned'])
    .orderBy('study.stateSince').orderBy('study.id').execute()
}

type Row = Awaited<ReturnType<typeof booked>>[number] | Awaited<ReturnType<typeof waiting>>[number]

function benchRow(row: Row): BenchRow {
  const state = row.studyState ?? (row.bookingState === 'attended' || row.bookingState === null || row.bookingState === 'cancelled' ? 'planned' : row.bookingState)
  const { bookingId, referralId, studyId, birthDate, recordNumber, startsAt, arrivedAt, startedAt, room, technologistName, question, urgency } = row
  return {
    bookingId, referralId, studyId, patientName: `${row.familyName}, ${row.givenName}`, birthDate, recordNumber, startsAt, arrivedAt, startedAt, room, technologistName, question, urgency,
    state, stateSince: row.studySince ?? row.since, returnQuestion: row.studyState === 'returned' ? row.returnQuestion ?? '' : '',
  }
}

/** The bench's day: returned and unfinished studies of other days first, then the day's bookings. */
export async function benchDay(db: Database, day: Day): Promise<BenchRow[]> {
  const today = await booked(db, day)
  const seen = new Set(today.map(row => row.studyId))
  const earlier = (await waiting(db, day.siteId)).filter(row => !seen.has(row.studyId))
  return [...earlier.filter(row => row.studyState === 'returned'), ...earlier.filter(row => row.studyState !== 'returned'), ...today].map(benchRow)
}
