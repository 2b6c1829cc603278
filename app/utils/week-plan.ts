import { clockOf, minutesOf, openMinutes, outsideHours, type OpenDay } from '#shared/open-hours'
import type { Week, WeekBooking } from '#shared/schemas/week'

/** Quarter hours: what an arrow key moves. */
export const STEP_MINUTES = 15

export type LaneKind = 'room' | 'technologist'
/** One column of the week: a day and a room, or a day and a person (null for bookings without a name). */
export interface Lane { day: string, kind: LaneKind, id: string | null, label: string }
/** A booking as it is being placed or moved; nothing is stored before it is confirmed. */
export interface Placing { referralId: string, bookingId: string | null, who: string, minutes: number, day: string, time: string, room: string, technologistId: string | null }

/** Days that are worth a column: weekends only where the site works or something is booked. */
export function shownDays(week: Week): OpenDay[] {
  return week.days.filter((day, index) => index < 5 || day.spans.length > 0 || week.bookings.some(booking => booking.day === day.day))
}

/** Every column, day by day. */
export function lanesOf(week: Week, kind: LaneKind): Lane[] {
  return shownDays(week).flatMap(({ day }): Lane[] => kind === 'room'
    ? week.rooms.map(room => ({ day, kind, id: room, label: room }))
    : [...week.technologists.filter(person => person.days.includes(day)).map(person => ({ day, kind, id: person.id, label: person.name })), { day, kind, id: null, label: 'not named' }])
}

export const laneHas = (lane: Lane, { day, room, technologistId }: { day: string, room: string, technologistId: string | null }): boolean => lane.day === day && (lane.kind === 'room' ? lane.id === room : lane.id === technologistId)

/** First and last hour that the week shows: working hours and whatever is booked outside them, in minutes. */
export function shownHours(week: Week): { from: number, until: number } {
  const begins = [...week.days.flatMap(day => day.spans.map(span => minutesOf(span.opensAt))), ...week.bookings.map(booking => minutesOf(booking.startTime))]
  const ends = [...week.days.flatMap(day => day.spans.map(span => minutesOf(span.closesAt))), ...week.bookings.map(booking => minutesOf(booking.startTime) + booking.minutes)]
  if (begins.length === 0) return { from: 8 * 60, until: 17 * 60 }
  return { from: Math.floor(Math.min(...begins) / 60) * 60, until: Math.min(24 * 60, Math.ceil(Math.max(...ends) / 60) * 60) }
}

const holds = (booking: WeekBooking) => booking.state === 'booked' || booking.state === 'arrived'

/**
 * Why a place is not free, in words, or null when it is: taken room or person, a day on which the person does not work,
 * or closed hours. The database has the last word.
 */
export function hindranceAt(week: Week, placing: Placing): { words: string, onlyHours: boolean } | null {
  const begin = minutesOf(placing.time)
  const meeting = week.bookings.filter(other => other.bookingId !== placing.bookingId && holds(other) && other.day === placing.day && minutesOf(other.startTime) < begin + placing.minutes && begin < minutesOf(other.startTime) + other.minutes)
  const inRoom = meeting.find(other => other.room === placing.room)
  if (inRoom) return { words: `${placing.room} is taken from ${inRoom.startTime} by ${inRoom.patientName}`, onlyHours: false }
  const person = week.technologists.find(one => one.id === placing.technologistId)
  const withPerson = placing.technologistId ? meeting.find(other => other.technologistId === placing.technologistId) : undefined
  if (withPerson) return { words: `${person?.name ?? 'The technologist'} is booked from ${withPerson.startTime} with ${withPerson.patientName}`, onlyHours: false }
  if (placing.technologistId && !person?.days.includes(placing.day)) return { words: `${person?.name ?? 'The technologist'} does not work here on that day`, onlyHours: false }
  if (placing.day < week.today) return { words: 'This day is over', onlyHours: false }
  const day = week.days.find(one => one.day === placing.day)
  const outside = day ? outsideHours(day, placing.time, placing.minutes) : null
  return outside ? { words: outside.replace(/\.$/, ''), onlyHours: true } : null
}

const into = (placing: Placing, lane: Lane): Placing => ({ ...placing, day: lane.day, ...(lane.kind === 'room' ? { room: lane.id ?? placing.room } : { technologistId: lane.id }) })

/** Where an arrow key takes it: up and down a quarter of an hour, left and right a column, Page Up and Page Down a day. Null for any other key. */
export function movedByKey(week: Week, kind: LaneKind, placing: Placing, key: string): Placing | null {
  const lanes = lanesOf(week, kind)
  const { from, until } = shownHours(week)
  const at = lanes.findIndex(lane => laneHas(lane, placing))
  const time = (minutes: number) => ({ ...placing, time: clockOf(Math.max(from, Math.min(until - placing.minutes, minutes))) })
  if (key === 'ArrowUp') return time(minutesOf(placing.time) - STEP_MINUTES)
  if (key === 'ArrowDown') return time(minutesOf(placing.time) + STEP_MINUTES)
  if (key === 'ArrowLeft' || key === 'ArrowRight') {
    const lane = lanes[at < 0 ? 0 : Math.max(0, Math.min(lanes.length - 1, at + (key === 'ArrowLeft' ? -1 : 1)))]
    return lane ? into(placing, lane) : placing
  }
  if (key === 'PageUp' || key === 'PageDown') {
    const days = shownDays(week).map(day => day.day)
    const day = days[Math.max(0, Math.min(days.length - 1, days.indexOf(placing.day) + (key === 'PageUp' ? -1 : 1)))]
    return day ? { ...placing, day } : placing
  }
  return null
}

/** Where a pointer puts it: the column and the quarter of an hour under it. */
export function movedTo(week: Week, placing: Placing, lane: Lane, minutes: number): Placing {
  const { from, until } = shownHours(week)
  return { ...into(placing, lane), time: clockOf(Math.max(from, Math.min(until - placing.minutes, Math.round(minutes / STEP_MINUTES) * STEP_MINUTES))) }
}

/** Minutes booked and minutes there are: rooms or people at work, whichever is fewer, times the hours that the day is open. */
export function capacityOf(week: Week, day: OpenDay): { booked: number, open: number } {
  const people = week.technologists.filter(person => person.days.includes(day.day)).length
  const booked = week.bookings.filter(booking => booking.day === day.day && booking.state !== 'did-not-attend').reduce((sum, booking) => sum + booking.minutes, 0)
  return { booked, open: openMinutes(day) * Math.min(week.rooms.length, people || week.rooms.length) }
}

/** @example hoursWords(330) // => '5.5 h' */
export const hoursWords = (minutes: number): string => `${Math.round(minutes / 6) / 10} h`
