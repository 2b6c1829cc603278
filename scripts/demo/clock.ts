/** A clock that the generator sets: every service sees the invented moment. */
export class DemoClock {
  private moment: Date

  constructor(start: Date) {
    this.moment = start
  }

  readonly read = () => new Date(this.moment)

  set(moment: Date): void {
    this.moment = moment
  }

  /** Moves forward by so many minutes. */
  forward(minutes: number): void {
    this.moment = new Date(this.moment.getTime() + minutes * 60_000)
  }
}

export const dayMs = 86_400_000
export const plusDays = (moment: Date, days: number): Date => new Date(moment.getTime() + days * dayMs)

/** A weekday morning at or before the moment, at so many hours UTC. */
export function workingTime(moment: Date, hour: number, minute = 0): Date {
  const day = new Date(moment)
  while (day.getUTCDay() === 0 || day.getUTCDay() === 6) day.setUTCDate(day.getUTCDate() - 1)
  day.setUTCHours(hour, minute, 0, 0)
  return day
}
