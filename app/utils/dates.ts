/**
 * Dates for people: "9 March 2026", short "9 Mar 2026"; a moment in the site's zone "9 Mar 2026, 14:02".
 * Written out by hand so that server and browser print the same whatever their language.
 */
const MONTHS = ['January', 'February', 'March', 'April', 'May', 'June', 'July', 'August', 'September', 'October', 'November', 'December']

/** @example formatDay('2026-03-09') // => '9 March 2026' */
export function formatDay(day: string): string {
  const [year, month, date] = day.slice(0, 10).split('-').map(Number)
  return year && month && date ? `${date} ${MONTHS[month - 1]} ${year}` : day
}

/** @example formatMonth('2026-03') // => 'March 2026' */
export function formatMonth(month: string): string {
  return formatDay(`${month}-01`).replace(/^1 /, '')
}

/** @example formatShortDay('2026-03-09') // => '9 Mar 2026' */
export function formatShortDay(day: string): string {
  return formatDay(day).replace(/ ([A-Z][a-z]{2})[a-z]* /, ' $1 ')
}

/** Making a formatter costs a hundred times what using one does; they hold no more than a zone's name. */
const formatters = new Map<string, Intl.DateTimeFormat>()
function formatterFor(timeZone: string): Intl.DateTimeFormat {
  const known = formatters.get(timeZone)
  if (known) return known
  const made = new Intl.DateTimeFormat('en-GB', { timeZone, year: 'numeric', month: '2-digit', day: '2-digit', hour: '2-digit', minute: '2-digit', hourCycle: 'h23' })
  formatters.set(timeZone, made)
  return made
}

/** Calendar day and clock of an instant in a zone: { day: '2026-03-09', time: '14:02' }. */
export function zonedParts(instant: string | number | Date, timeZone: string): { day: string, time: string } {
  const parts = formatterFor(timeZone).formatToParts(new Date(instant))
  const part = (type: string) => parts.find(p => p.type === type)?.value ?? ''
  return { day: `${part('year')}-${part('month')}-${part('day')}`, time: `${part('hour')}:${part('minute')}` }
}

/**
 * The instant of a wall clock in a zone, ISO 8601; of an hour that comes twice the first.
 * @example momentAt('2026-03-09', '14:02', 'Europe/Prague') // => '2026-03-09T13:02:00.000Z'
 */
export function momentAt(day: string, time: string, timeZone: string): string | null {
  const wanted = Date.parse(`${day}T${time}:00Z`)
  if (Number.isNaN(wanted)) return null
  const shown = (instant: number) => {
    const parts = zonedParts(instant, timeZone)
    return Date.parse(`${parts.day}T${parts.time}:00Z`)
  }
  const guess = wanted - (shown(wanted) - wanted)
  const found = guess - (shown(guess) - wanted)
  return shown(found) === wanted ? new Date(found).toISOString() : null
}

/** @example formatMoment('2026-03-09T13:02:00Z', 'Europe/Prague') // => '9 Mar 2026, 14:02' */
export function formatMoment(instant: string, timeZone: string): string {
  const { day, time } = zonedParts(instant, timeZone)
  return `${formatShortDay(day)}, ${time}`
}

/**
 * How long something has waited, in the largest unit that says enough.
 * @example formatElapsed(3 * 3600_000) // => '3 h'
 */
export function formatElapsed(milliseconds: number): string {
  const minutes = Math.max(0, Math.floor(milliseconds / 60_000))
  if (minutes < 1) return 'just now'
  if (minutes < 60) return `${minutes} min`
  if (minutes < 48 * 60) return `${Math.floor(minutes / 60)} h`
  return `${Math.floor(minutes / 1440)} days`
}

/**
 * A calendar day as people type it: "2026-03-09", "20260309", "9 March 2026", "9 Mar 2026". Null when it is none of
 * these or not a day of the calendar. "03/09/26" is refused: it means two different days.
 */
export function parseDay(text: string): string | null {
  const words = text.trim()
  const iso = /^(\d{4})-?(\d{1,2})-?(\d{1,2})$/.exec(words)
  const named = /^(\d{1,2})\.?\s+([A-Za-z]{3,9})\.?\s+(\d{4})$/.exec(words)
  const found = iso ? { year: iso[1], month: Number(iso[2]), date: Number(iso[3]) } : named ? { year: named[3], month: monthNumber(named[2] ?? ''), date: Number(named[1]) } : null
  if (!found || !found.month) return null
  const day = `${found.year}-${String(found.month).padStart(2, '0')}-${String(found.date).padStart(2, '0')}`
  const check = new Date(`${day}T00:00:00Z`)
  return !Number.isNaN(check.getTime()) && check.toISOString().slice(0, 10) === day ? day : null
}

function monthNumber(name: string): number {
  return MONTHS.findIndex(month => month.toLowerCase().startsWith(name.toLowerCase())) + 1
}

/** Completed years on a day. @example ageOn('1974-03-14', '2026-12-02') // => 52 */
export function ageOn(birthDate: string, day: string): number {
  const years = Number(day.slice(0, 4)) - Number(birthDate.slice(0, 4))
  return day.slice(5, 10) < birthDate.slice(5, 10) ? years - 1 : years
}

/**
 * Day and time as people type them ("2026-03-09 14:05", "9 March 2026, 14:05") on the wall clock of a zone, as an instant.
 * Null when it is none of these. An hour that occurs twice gives the first of the two.
 * @example parseMoment('9 Mar 2026, 14:02', 'Europe/Prague') // => '2026-03-09T13:02:00.000Z'
 */
export function parseMoment(text: string, timeZone: string): string | null {
  const [, dayText = '', hour = '', minute = ''] = /^(.+?),?\s+(\d{1,2}):(\d{2})$/.exec(text.trim()) ?? []
  const day = parseDay(dayText)
  if (!day || Number(hour) > 23 || Number(minute) > 59) return null
  const wanted = Date.parse(`${day}T${hour.padStart(2, '0')}:${minute}:00Z`)
  const ahead = (at: number) => {
    const wall = zonedParts(at, timeZone)
    return Date.parse(`${wall.day}T${wall.time}:00Z`) - at
  }
  const fitting = [wanted - 86_400_000, wanted + 86_400_000].map(at => wanted - ahead(at)).filter(at => at + ahead(at) === wanted)
  return new Date(fitting.length > 0 ? Math.min(...fitting) : wanted - ahead(wanted - 86_400_000)).toISOString()
}
