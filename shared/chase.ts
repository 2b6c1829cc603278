/**
 * After how many days without an acknowledgement a report that was sent is followed up, by urgency of the referral.
 * Common practice, no source.
 */
export const chaseDays = { 'same-week': 1, 'urgent': 2, 'routine': 5 } as const
export type Urgency = keyof typeof chaseDays

/** @example chaseDueAt('2026-12-02T09:00:00.000Z', 'urgent') // => '2026-12-04T09:00:00.000Z' */
export function chaseDueAt(sentAt: string, urgency: Urgency): string {
  return new Date(Date.parse(sentAt) + chaseDays[urgency] * 86_400_000).toISOString()
}
