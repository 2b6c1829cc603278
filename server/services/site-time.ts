/** Days and times as a site's wall clock shows them. Zones are IANA names; the rules come with Node's own Intl. */
const formatters = new Map<string, Intl.DateTimeFormat>()

function formatter(timeZone: string): Intl.DateTimeFormat {
  let found = formatters.get(timeZone)
  if (!found) {
    found = new Intl.DateTimeFormat('en-GB', { timeZone, hourCycle: 'h23', year: 'numeric', month: '2-digit', day: '2-digit', hour: '2-digit', minute: '2-digit', second: '2-digit' })
    formatters.set(timeZone, found)
  }
  return found
}

function wallClock(instant: Date, timeZone: string): Record<string, string> {
  return Object.fromEntries(formatter(timeZone).formatToParts(instant).map(part => [part.type, part.value]))
}

/** True for a zone name that this machine knows. */
export function isTimeZone(timeZone: string): boolean {
  try {
    formatter(timeZone)
    return true
  }
  catch { return false }
}

/**
 * The calendar day at the site.
 * @example localDate(new Date('2026-03-28T23:30:00Z'), 'Europe/Prague') // => '2026-03-29'
 */
export function localDate(instant: Date, timeZone: string): string {
  const { year, month, day } = wallClock(instant, timeZone)
  return `${year!.padStart(4, '0')}-${month}-${day}`
}

/** @example localTime(new Date('2026-01-05T08:05:00Z'), 'Europe/Prague') // => '09:05' */
export function localTime(instant: Date, timeZone: string): string {
  const { hour, minute } = wallClock(instant, timeZone)
  return `${hour}:${minute}`
}

/** Minutes that the site's clock is ahead of UTC at this moment. */
function offsetMinutes(instant: Date, timeZone: string): number {
  const parts = wallClock(instant, timeZone)
  const asUtc = Date.UTC(Number(parts.year), Number(parts.month) - 1, Number(parts.day), Number(parts.hour), Number(parts.minute), Number(parts.second))
  return Math.round((asUtc - Math.floor(instant.getTime() / 1000) * 1000) / 60_000)
}

/**
 * The moment at which the site's clock shows this day and time. An hour that occurs twice (autumn) gives the first
 * of the two; an hour that does not occur (spring) gives the moment as far after the change as the time is past it.
 * @example instantOf('2026-07-01', '09:00', 'Europe/Prague').toISOString() // => '2026-07-01T07:00:00.000Z'
 */
export function instantOf(date: string, time: string, timeZone: string): Date {
  const wanted = Date.parse(`${date}T${time.length === 5 ? `${time}:00` : time}Z`)
  const dayMs = 86_400_000
  const offsets = [wanted - dayMs, wanted + dayMs].map(at => offsetMinutes(new Date(at), timeZone))
  const candidates = offsets.map(offset => wanted - offset * 60_000)
  const fitting = candidates.filter(at => at + offsetMinutes(new Date(at), timeZone) * 60_000 === wanted)
  return new Date(fitting.length > 0 ? Math.min(...fitting) : wanted - offsets[0]! * 60_000)
}

/**
 * First moment of the day at the site and first moment of the next, as the database keeps moments: `at >= from and at < until`.
 */
export function dayBounds(date: string, timeZone: string): { from: string, until: string } {
  const next = new Date(Date.parse(`${date}T00:00:00Z`) + 86_400_000).toISOString().slice(0, 10)
  return { from: instantOf(date, '00:00', timeZone).toISOString(), until: instantOf(next, '00:00', timeZone).toISOString() }
}
