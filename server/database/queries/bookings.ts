import type { Database } from '../connection'

export interface TakenTime { bookingId: string, room: string, technologistId: string | null, startsAt: string, endsAt: string }

/** Bookings that hold a room of the site between two moments. */
export async function takenTimes(db: Database, { siteId, from, until }: { siteId: string, from: string, until: string }): Promise<TakenTime[]> {
  return db.selectFrom('booking').select(['id as bookingId', 'room', 'technologistId', 'startsAt', 'endsAt'])
    .where('siteId', '=', siteId).where('startsAt', '>=', from).where('startsAt', '<', until).where('state', 'in', ['booked', 'arrived', 'attended']).orderBy('startsAt').orderBy('room').execute()
}
