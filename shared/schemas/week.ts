import type { OpenDay } from '../open-hours'
import type { Urgency } from './referral'

/** One booking of a week, with its span on the site's wall clock. */
export interface WeekBooking {
  bookingId: string
  referralId: string
  number: string
  patientName: string
  urgency: Urgency
  state: 'booked' | 'arrived' | 'attended' | 'did-not-attend'
  room: string
  technologistId: string | null
  day: string
  startTime: string
  minutes: number
}
export interface WeekPerson { id: string, name: string, /** days of this week on which the person can be booked */ days: string[] }
/** An accepted referral (or one that was not attended) that waits for a time. */
export interface WaitingReferral { referralId: string, number: string, patientName: string, urgency: Urgency, state: 'accepted' | 'did-not-attend', since: string, receivedAt: string | null, dueAt: string | null }
/** GET /api/bookings/week */
export interface Week {
  siteId: string
  timeZone: string
  from: string
  today: string
  days: OpenDay[]
  rooms: string[]
  technologists: WeekPerson[]
  bookings: WeekBooking[]
  waiting: WaitingReferral[]
  waitingTotal: number
}
/** GET /api/bookings/first-free: the earliest times that fit, each with room and technologist. */
export interface FreeSlot { siteId: string, room: string, technologistId: string | null, technologistName: string | null, date: string, time: string, /** days from the receipt of the referral */ leadDays: number, /** later than the organisation's clocks want */ late: boolean }
