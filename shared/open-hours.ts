import type { ClosedDay, OpenSpan } from './schemas/site-calendar'

/** "09:30" as minutes since midnight. @example minutesOf('09:30') // => 570 */
export const minutesOf = (clock: string): number => Number(clock.slice(0, 2)) * 60 + Number(clock.slice(3, 5))
/** @example clockOf(570) // => '09:30' */
export const clockOf = (minutes: number): string => `${String(Math.floor(minutes / 60)).padStart(2, '0')}:${String(minutes % 60).padStart(2, '0')}`
/** 1 Monday to 7 Sunday. @example weekdayOf('2026-12-02') // => 3 */
export const weekdayOf = (day: string): number => new Date(`${day}T00:00:00Z`).getUTCDay() || 7
/** @example addDays('2026-12-31', 1) // => '2027-01-01' */
export const addDays = (day: string, count: number): string => new Date(Date.parse(`${day}T00:00:00Z`) + count * 86_400_000).toISOString().slice(0, 10)
/** The Monday on or before a day. @example mondayOf('2026-12-02') // => '2026-11-30' */
export const mondayOf = (day: string): string => addDays(day, 1 - weekdayOf(day))

/** What a site has stated about a day: the spans of its weekday, none on a closed day. `stated` false: no hours were ever given, and any time may be booked. */
export interface OpenDay { day: string, spans: { opensAt: string, closesAt: string }[], closedBecause: string | null, stated: boolean }

/** @example openDay('2026-12-24', hours, [{ day: '2026-12-24', reason: 'public holiday' }]).closedBecause // => 'public holiday' */
export function openDay(day: string, hours: readonly OpenSpan[], closed: readonly ClosedDay[]): OpenDay {
  const closedBecause = closed.find(one => one.day === day)?.reason ?? null
  const spans = closedBecause !== null ? [] : hours.filter(span => span.weekday === weekdayOf(day)).map(({ opensAt, closesAt }) => ({ opensAt, closesAt }))
  return { day, spans, closedBecause, stated: hours.length > 0 }
}

/** Why a span does not lie within working hours, in words, or null when it does (or when no hours are stated). */
export function outsideHours({ spans, closedBecause, stated }: OpenDay, startsAt: string, minutes: number): string | null {
  if (closedBecause !== null) return `The site is closed on that day: ${closedBecause}.`
  if (!stated) return null
  if (spans.length === 0) return 'The site does not work on that weekday.'
  const begin = minutesOf(startsAt)
  const fits = spans.some(span => minutesOf(span.opensAt) <= begin && begin + minutes <= minutesOf(span.closesAt))
  return fits ? null : `The site works from ${spans.map(span => `${span.opensAt} to ${span.closesAt}`).join(' and ')} on that day.`
}

/** Minutes that a day is open. @example openMinutes(openDay('2026-12-02', hours, [])) // => 540 */
export const openMinutes = (day: OpenDay): number => day.spans.reduce((sum, span) => sum + minutesOf(span.closesAt) - minutesOf(span.opensAt), 0)
