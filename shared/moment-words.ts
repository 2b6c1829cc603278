const months = ['January', 'February', 'March', 'April', 'May', 'June', 'July', 'August', 'September', 'October', 'November', 'December']

/**
 * A moment for people, on the wall clock of a place; the zone is named where it is not the reader's own to know.
 * A text that is no moment stays as it is.
 *
 * @example momentWords('2026-03-09T13:02:00Z', 'Europe/Prague') // => '9 March 2026, 14:02 (Europe/Prague)'
 */
export function momentWords(instant: string, timeZone: string): string {
  const at = new Date(instant)
  if (Number.isNaN(at.getTime())) return instant
  const parts = Object.fromEntries(new Intl.DateTimeFormat('en-GB', { timeZone, year: 'numeric', month: 'numeric', day: 'numeric', hour: '2-digit', minute: '2-digit', hourCycle: 'h23' }).formatToParts(at).map(part => [part.type, part.value]))
  return `${Number(parts.day)} ${months[Number(parts.month) - 1]} ${parts.year}, ${parts.hour}:${parts.minute} (${timeZone})`
}
