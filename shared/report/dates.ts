const months = ['January', 'February', 'March', 'April', 'May', 'June', 'July', 'August', 'September', 'October', 'November', 'December'] as const

/** How a language writes a day: names of the months, and what stands after the number of the day. */
export interface DayWords { months: readonly string[], afterDay: string }
export const englishDays: DayWords = { months, afterDay: '' }

/**
 * A calendar day for people. It is never shifted by a time zone.
 *
 * @example formatDay('2026-03-09') // => '9 March 2026'
 */
export function formatDay(isoDate: string, words: DayWords = englishDays): string {
  const [year, month, day] = isoDate.slice(0, 10).split('-').map(Number)
  return `${day}${words.afterDay} ${words.months[(month ?? 1) - 1]} ${year}`
}

/** Year, month, day, hour, minute and offset of a moment in a zone. */
function partsIn(iso: string, timeZone: string): Record<string, string> {
  const format = new Intl.DateTimeFormat('en-GB', { timeZone, year: 'numeric', month: '2-digit', day: '2-digit', hour: '2-digit', minute: '2-digit', hourCycle: 'h23', timeZoneName: 'longOffset' })
  return Object.fromEntries(format.formatToParts(new Date(iso)).map(part => [part.type, part.value]))
}

/**
 * A moment for people, at the site, with its offset: a signature's time must be clear without knowing the zone.
 *
 * @example formatMoment('2026-12-02T15:40:00Z', 'Europe/Vienna') // => '2 December 2026, 16:40 (+01:00)'
 */
export function formatMoment(iso: string, timeZone: string, words: DayWords = englishDays): string {
  const parts = partsIn(iso, timeZone)
  const offset = (parts.timeZoneName ?? '').replace('GMT', '') || '+00:00'
  return `${formatDay(`${parts.year}-${parts.month}-${parts.day}`, words)}, ${parts.hour}:${parts.minute} (${offset})`
}

/** @example formatClock('2026-12-02T15:40:00Z', 'Europe/Vienna') // => '16:40' */
export function formatClock(iso: string, timeZone: string): string {
  const parts = partsIn(iso, timeZone)
  return `${parts.hour}:${parts.minute}`
}

/**
 * A hash as people compare it: the first twelve signs in threes of four.
 *
 * @example shortFingerprint('7c1e90ab44d2ff…') // => '7c1e 90ab 44d2'
 */
export function shortFingerprint(sha256: string): string {
  return (sha256.slice(0, 12).match(/.{4}/g) ?? []).join(' ')
}
