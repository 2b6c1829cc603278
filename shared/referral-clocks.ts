import type { Clocks } from './policies/clocks'
import type { Urgency } from './schemas/referral'
import type { ReferralState } from './states'

/** Which clock of the policy runs in which state; in the others nobody at the intake is waited for. */
export const clockOfState: Partial<Record<ReferralState, keyof Clocks>> = {
  'draft': 'answerReferral', 'received': 'answerReferral', 'returned': 'information', 'accepted': 'book', 'did-not-attend': 'book',
}

/**
 * By when something has to happen with a referral, by the organisation's clocks; null where none runs.
 * @example dueOf({ state: 'received', urgency: 'urgent', stateSince: '2026-12-01T08:00:00.000Z' }, clocks) // => '2026-12-02T08:00:00.000Z'
 */
export function dueOf({ state, urgency, stateSince }: { state: ReferralState, urgency: Urgency, stateSince: string }, clocks: Clocks): string | null {
  const clock = clockOfState[state]
  return clock ? new Date(Date.parse(stateSince) + clocks[clock][urgency] * 3_600_000).toISOString() : null
}
