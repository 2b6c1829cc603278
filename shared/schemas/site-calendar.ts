import * as z from 'zod'
import { isoDateSchema } from './common'

/** When a site works: rooms, working hours by weekday, closed days. */
export const weekdays = ['Monday', 'Tuesday', 'Wednesday', 'Thursday', 'Friday', 'Saturday', 'Sunday'] as const
export const clockSchema = z.string().regex(/^([01]\d|2[0-3]):[0-5]\d$/, 'Enter the time as hours and minutes, for example 08:30.')

export interface SiteRoomView { id: string, name: string, note: string, closed: boolean }
export interface OpenSpan { /** 1 Monday to 7 Sunday */ weekday: number, opensAt: string, closesAt: string }
export interface ClosedDay { day: string, reason: string }
/** GET /api/sites/:id/calendar */
export interface SiteCalendar { rooms: SiteRoomView[], hours: OpenSpan[], closedDays: ClosedDay[] }

/** PUT /api/sites/:id/rooms: in the order in which they are shown. A room without an id is new; one that is left out is closed. */
export const siteRoomsSchema = z.object({
  rooms: z.array(z.object({ id: z.string().max(64).optional(), name: z.string().trim().min(1, 'Enter the name of the room.').max(60), note: z.string().trim().max(200).default('') })).min(1, 'Name at least one room.').max(40),
})
export type SiteRoomsInput = z.output<typeof siteRoomsSchema>['rooms']

/** PUT /api/sites/:id/hours: every span of the week; a day without one is closed. */
export const siteHoursSchema = z.object({
  hours: z.array(z.object({ weekday: z.number().int().min(1).max(7), opensAt: clockSchema, closesAt: clockSchema }).refine(span => span.closesAt > span.opensAt, { path: ['closesAt'], message: 'The end must be after the beginning.' })).max(28),
}).superRefine(({ hours }, check) => {
  hours.forEach((span, index) => {
    const other = hours.findIndex((earlier, at) => at < index && earlier.weekday === span.weekday && earlier.opensAt < span.closesAt && span.opensAt < earlier.closesAt)
    if (other >= 0) check.addIssue({ code: 'custom', path: ['hours', index, 'opensAt'], message: `${weekdays[span.weekday - 1]}: two spans overlap.` })
  })
})

/** POST /api/sites/:id/closed-days */
export const closedDaySchema = z.object({ day: isoDateSchema, reason: z.string().trim().min(2, 'Say why it is closed, for example "public holiday".').max(120) })
