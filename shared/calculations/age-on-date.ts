/** Age as it stands on a day, from calendar dates; no clock and no time zone. */
export interface Age {
  years: number
  /** Completed months in all. */
  months: number
  /** Days since the last completed month. */
  days: number
}

interface CalendarDay { year: number, month: number, day: number }

const parse = (isoDate: string): CalendarDay | null => {
  const match = /^(\d{4})-(\d{2})-(\d{2})$/.exec(isoDate)
  return match ? { year: Number(match[1]), month: Number(match[2]), day: Number(match[3]) } : null
}

const daysIn = (year: number, month: number): number => new Date(Date.UTC(year, month, 0)).getUTCDate()

/** The day of the month on which a person born on `born.day` completes a month; the last day in shorter months. */
const turningDay = (born: CalendarDay, year: number, month: number): number => Math.min(born.day, daysIn(year, month))

/**
 * Completed years, months and days on the study date, or null when the date lies before the birth or is not a date.
 * A person born on 29 February completes a year on 28 February of a common year (common practice).
 *
 * @example
 * ageOnDate('1974-03-14', '2026-12-02') // => { years: 52, months: 632, days: 18 }
 */
export function ageOnDate(birthDate: string, onDate: string): Age | null {
  const born = parse(birthDate)
  const on = parse(onDate)
  if (!born || !on || onDate < birthDate) return null
  const reached = on.day >= turningDay(born, on.year, on.month)
  const months = (on.year - born.year) * 12 + on.month - born.month - (reached ? 0 : 1)
  return { years: Math.floor(months / 12), months, days: daysSinceTurning(born, on, reached) }
}

function daysSinceTurning(born: CalendarDay, on: CalendarDay, reached: boolean): number {
  if (reached) return on.day - turningDay(born, on.year, on.month)
  const year = on.month === 1 ? on.year - 1 : on.year
  const month = on.month === 1 ? 12 : on.month - 1
  return daysIn(year, month) - turningDay(born, year, month) + on.day
}

/**
 * Age as limits compare it: completed years from the first birthday on; below it a fraction, (months + days / 31) / 12,
 * which meets bands given in months exactly at their edges.
 *
 * @example
 * ageInYears('1974-03-14', '2026-12-02') // => 52
 * ageInYears('2026-01-10', '2026-06-10') // => 0.4166666666666667
 */
export function ageInYears(birthDate: string, onDate: string): number | null {
  const age = ageOnDate(birthDate, onDate)
  if (!age) return null
  return age.years >= 1 ? age.years : (age.months + age.days / 31) / 12
}
