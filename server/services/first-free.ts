import { policyInForce } from '#server/database/queries/policies'
import { closedDays, roomNames, siteHours } from '#server/database/queries/site-calendar'
import { takenBetween } from '#server/database/queries/week'
import { DomainError } from '#shared/errors'
import { addDays, clockOf, minutesOf, openDay } from '#shared/open-hours'
import type { Urgency } from '#shared/schemas/referral'
import type { FreeSlot } from '#shared/schemas/week'
import type { ServiceContext } from './context'
import { dayBounds, instantOf, localDate, localTime } from './site-time'
import { recordersOn } from './view-week'

const STEP = 15
const DAYS_AHEAD = 90
/** For a site that has stated no hours. */
const usualSpans = [{ opensAt: '08:00', closesAt: '17:00' }]
/** Days from today on which the search begins: what is routine leaves the next days to what is urgent. Common practice. */
const beginsAfter: Record<Urgency, number> = { 'same-week': 0, 'urgent': 1, 'routine': 3 }

export interface FirstFreeWish { referralId: string, siteId: string, minutes: number, /** the days before it are not looked at */ from?: string }
interface Taken { siteId: string, room: string, technologistId: string | null, startsAt: string, endsAt: string }

/**
 * The earliest free times for a referral by its urgency, at most one a day and three in all: a room and, where somebody
 * works there, a technologist who is not booked elsewhere. The database has the last word when it is booked.
 * @throws DomainError 'not-found'
 */
export async function firstFree(context: ServiceContext, { referralId, siteId, minutes, from }: FirstFreeWish): Promise<FreeSlot[]> {
  const { db } = context
  const site = await db.selectFrom('site').select(['id', 'timeZone']).where('id', '=', siteId).where('closedAt', 'is', null).executeTakeFirst()
  const referral = await db.selectFrom('referral').select(['urgency', 'receivedAt', 'createdAt']).where('id', '=', referralId).executeTakeFirst()
  if (!site || !referral) throw new DomainError('not-found')
  const today = localDate(context.clock(), site.timeZone)
  const first = [addDays(today, beginsAfter[referral.urgency]), from ?? ''].toSorted().at(-1) ?? today
  const { body: clocks } = await policyInForce(db, 'clocks', siteId, today)
  const received = referral.receivedAt ?? referral.createdAt
  const lateAfter = Date.parse(received) + clocks.offerAppointment[referral.urgency] * 3_600_000
  const rooms = (await roomNames(db, [siteId])).get(siteId) ?? []
  const [hours, closed] = [await siteHours(db, siteId), await closedDays(db, siteId, { from: first })]
  const found: FreeSlot[] = []
  for (let count = 0; count < DAYS_AHEAD && found.length < 3; count++) {
    const date = addDays(first, count)
    const day = openDay(date, hours, closed)
    const spans = day.stated || day.closedBecause !== null ? day.spans : usualSpans
    const slot = spans.length ? await firstOfDay(context, { siteId, timeZone: site.timeZone, date, spans, rooms, minutes, today }) : null
    if (slot) found.push({ ...slot, siteId, date, leadDays: Math.max(0, Math.round((Date.parse(date) - Date.parse(localDate(new Date(received), site.timeZone))) / 86_400_000)), late: instantOf(date, slot.time, site.timeZone).getTime() > lateAfter })
  }
  return found
}

interface DayWish { siteId: string, timeZone: string, date: string, spans: { opensAt: string, closesAt: string }[], rooms: string[], minutes: number, today: string }
type DaySlot = Pick<FreeSlot, 'room' | 'technologistId' | 'technologistName' | 'time'>

async function firstOfDay(context: ServiceContext, { siteId, timeZone, date, spans, rooms, minutes, today }: DayWish): Promise<DaySlot | null> {
  const people = await recordersOn(context, siteId, date)
  const bounds = dayBounds(date, timeZone)
  const taken = await takenBetween(context.db, { siteId, technologistIds: people.map(person => person.id), from: new Date(Date.parse(bounds.from) - 86_400_000).toISOString(), until: bounds.until })
  const notBefore = date === today ? minutesOf(localTime(context.clock(), timeZone)) + STEP : 0
  for (const { opensAt, closesAt } of spans) {
    for (let at = Math.ceil(Math.max(minutesOf(opensAt), notBefore) / STEP) * STEP; at + minutes <= minutesOf(closesAt); at += STEP) {
      const slot = freeAt({ siteId, rooms, people, taken, from: instantOf(date, clockOf(at), timeZone).getTime(), minutes })
      if (slot) return { ...slot, time: clockOf(at) }
    }
  }
  return null
}

function freeAt({ siteId, rooms, people, taken, from, minutes }: { siteId: string, rooms: string[], people: { id: string, name: string }[], taken: Taken[], from: number, minutes: number }): Omit<DaySlot, 'time'> | null {
  const until = from + minutes * 60_000
  const meeting = taken.filter(one => Date.parse(one.startsAt) < until && Date.parse(one.endsAt) > from)
  const room = rooms.find(name => !meeting.some(one => one.siteId === siteId && one.room === name))
  const person = people.find(({ id }) => !meeting.some(one => one.technologistId === id))
  // Where nobody at all is listed, a time without a name is better than none; where everybody is taken, it is not free.
  if (!room || (people.length > 0 && !person)) return null
  return { room, technologistId: person?.id ?? null, technologistName: person?.name ?? null }
}
