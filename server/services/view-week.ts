import { awayOn } from '#server/database/queries/absences'
import { policyInForce } from '#server/database/queries/policies'
import { closedDays, roomNames, siteHours } from '#server/database/queries/site-calendar'
import { bookingsBetween, waitingForTime } from '#server/database/queries/week'
import { DomainError } from '#shared/errors'
import { addDays, mondayOf, openDay } from '#shared/open-hours'
import { dueOf } from '#shared/referral-clocks'
import type { Week, WeekPerson } from '#shared/schemas/week'
import { recordersAt } from './book-referral'
import type { ServiceContext } from './context'
import { dayBounds, localDate, localTime } from './site-time'

const MOST_WAITING = 50

/** Who can record on a day: a role there, and not away. */
export async function recordersOn(context: ServiceContext, siteId: string, day: string): Promise<{ id: string, name: string }[]> {
  const people = await recordersAt(context.db, siteId, day)
  const away = await awayOn(context.db, people.map(person => person.id), day)
  return people.filter(person => !away.has(person.id))
}

async function peopleOf(context: ServiceContext, siteId: string, days: string[]): Promise<WeekPerson[]> {
  const people = new Map<string, WeekPerson>()
  for (const day of days) {
    for (const { id, name } of await recordersOn(context, siteId, day)) people.set(id, { id, name, days: [...people.get(id)?.days ?? [], day] })
  }
  return [...people.values()].toSorted((a, b) => a.name.localeCompare(b.name))
}

/**
 * A week of a site from its Monday: working hours and closed days, rooms, who works when, every booking, and the
 * referrals that wait for a time.
 * @throws DomainError 'not-found'
 */
export async function viewWeek(context: ServiceContext, { siteId, day }: { siteId: string, day?: string }): Promise<Week> {
  const { db } = context
  const site = await db.selectFrom('site').select('timeZone').where('id', '=', siteId).where('closedAt', 'is', null).executeTakeFirst()
  if (!site) throw new DomainError('not-found')
  const { timeZone } = site
  const today = localDate(context.clock(), timeZone)
  const from = mondayOf(day ?? today)
  const days = Array.from({ length: 7 }, (_, index) => addDays(from, index))
  const [hours, closed, rooms] = [await siteHours(db, siteId), await closedDays(db, siteId, { from, until: addDays(from, 7) }), await roomNames(db, [siteId])]
  const booked = await bookingsBetween(db, { siteId, from: dayBounds(from, timeZone).from, until: dayBounds(days[6]!, timeZone).until })
  const { total, rows } = await waitingForTime(db, siteId, MOST_WAITING)
  const { body: clocks } = await policyInForce(db, 'clocks', siteId, today)
  return {
    siteId, timeZone, from, today, days: days.map(one => openDay(one, hours, closed)), rooms: rooms.get(siteId) ?? [], technologists: await peopleOf(context, siteId, days),
    bookings: booked.map(({ familyName, givenName, startsAt, endsAt, state, ...row }) => ({
      ...row, state: state as Exclude<typeof state, 'cancelled'>, patientName: `${familyName}, ${givenName}`, day: localDate(new Date(startsAt), timeZone), startTime: localTime(new Date(startsAt), timeZone), minutes: Math.round((Date.parse(endsAt) - Date.parse(startsAt)) / 60_000),
    })),
    waiting: rows.map(({ familyName, givenName, stateSince, ...row }) => ({ ...row, patientName: `${familyName}, ${givenName}`, since: stateSince, dueAt: dueOf({ state: row.state, urgency: row.urgency, stateSince }, clocks) })),
    waitingTotal: total,
  }
}
