import * as z from 'zod'
import { policyKind } from './kind'

const hours = z.number('Enter the hours.').int('Enter whole hours.').min(1, 'Enter 1 hour or more.').max(8760, 'Enter at most 8760 hours.')
const byUrgency = z.object({ 'routine': hours, 'urgent': hours, 'same-week': hours })
const usual = { information: { 'routine': 336, 'urgent': 120, 'same-week': 24 }, book: { 'routine': 120, 'urgent': 24, 'same-week': 8 } }

/** Within how many hours each waiting thing is due, by urgency. A clock past its hours is overdue and goes to a named person. */
export const clocksSchema = z.object({
  /** Received to accepted, returned or declined. */
  answerReferral: byUrgency,
  /** Returned for information to completed; versions of before it was asked have the usual hours. */
  information: byUrgency.default(usual.information),
  /** Accepted, or not attended, to booked. */
  book: byUrgency.default(usual.book),
  /** Complete referral to the first appointment offered. */
  offerAppointment: byUrgency,
  /** Handed over by the technologist to signed. */
  sign: byUrgency,
  /** Sent to acknowledged; after that somebody telephones. */
  acknowledge: byUrgency,
  /** How long something may be overdue before the medical director is told. */
  escalate: byUrgency,
})
export type Clocks = z.infer<typeof clocksSchema>

const day = 24

/** The hours are common practice, no source: a laboratory sets its own. */
export const clocks = policyKind({
  label: 'Clocks',
  about: 'Within how many hours each waiting thing is due, by urgency.',
  scope: 'organisation',
  schema: clocksSchema,
  initial: {
    answerReferral: { 'routine': 3 * day, 'urgent': day, 'same-week': 4 },
    ...usual,
    offerAppointment: { 'routine': 42 * day, 'urgent': 14 * day, 'same-week': 5 * day },
    sign: { 'routine': 2 * day, 'urgent': day, 'same-week': 8 },
    acknowledge: { 'routine': 5 * day, 'urgent': 2 * day, 'same-week': day },
    escalate: { 'routine': 7 * day, 'urgent': 2 * day, 'same-week': day },
  },
})
