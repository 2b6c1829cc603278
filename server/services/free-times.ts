import { takenTimes } from '#server/database/queries/bookings'
import { closedDays, roomNames, siteHours } from '#server/database/queries/site-calendar'
import { DomainError } from '#shared/errors'
import { addDays, openDay, type OpenDay } from '#shared/open-hours'
import { recordersAt } from './book-referral'
import type { ServiceContext } from './context'
import { dayBounds, localTime } from './site-time'

export interface FreeTimes {
  open: OpenDay
  timeZone: string
  rooms: string[]
  technologists: { id: string, name: string }[]
  /** Local times at the site beside the moments, as "09:30". */
  taken: { bookingId: string, room: string, technologistId: string | null, startsAt: string, endsAt: string, startTime: string, endTime: string }[]
}

/** What a booking on that day can choose from; the database has the last word when it is made. */
export async function freeTimes({ db }: ServiceContext, { siteId, date }: { siteId: string, date: string }): Promise<FreeTimes> {
  const site = await db.selectFrom('site').select('timeZone').where('id', '=', siteId).executeTakeFirst()
  if (!site) throw new DomainError('not-found')
  const timeOf = (at: string) => localTime(new Date(at), site.timeZone)
  const taken = await takenTimes(db, { siteId, ...dayBounds(date, site.timeZone) })
  const open = openDay(date, await siteHours(db, siteId), await closedDays(db, siteId, { from: date, until: addDays(date, 1) }))
  return {
    open,
    timeZone: site.timeZone, rooms: (await roomNames(db, [siteId])).get(siteId) ?? [], technologists: await recordersAt(db, siteId, date),
    taken: taken.map(time => ({ ...time, startTime: timeOf(time.startsAt), endTime: timeOf(time.endsAt) })),
  }
}
