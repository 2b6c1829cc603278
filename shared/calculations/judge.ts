import type { FoundLimit, FoundLimits } from './find-limit'
import type { ColdEffect } from './quantity-info'
import { isOutside } from './round-for-print'
import { TOLERANCE } from './tolerance'
import type { AppliedLimit, ComputedValue, Verdict } from './types'

/** How cold bears on one number: not at all, on all that it was made from, or on part of it. */
export interface ColdBearing { state: 'none' | 'all' | 'part', words: string }
export const notCold: ColdBearing = { state: 'none', words: '' }

const absenceReasons = { 'technical': 'not recordable for technical reasons', 'not-done': 'not done', 'stopped': 'stopped at the patient\'s wish' } as const

/**
 * The verdict on one number.
 *
 * A value exactly on a limit is within. No response where there is a limit is a verdict of its own. In a cold limb a
 * slow value is not interpretable as slowing, and a normal amplitude or an absent decrement may be masked; what cold
 * cannot explain (a low amplitude, a latency within) stays as it is. No limit never reads as normal.
 *
 * @example
 * judge({ kind: 'value', value: 5.2, uncertainty: 0.1 }, { kind: 'limits', upper }, 'lengthens', notCold)
 * // => { kind: 'outside', direction: 'above', limit: upper, limits: [upper], nearLimit: false }
 */
export function judge(value: ComputedValue, answer: FoundLimit, effect: ColdEffect, cold: ColdBearing): Verdict {
  if (value.kind === 'not-computable') return { kind: 'none' }
  if (value.kind === 'absent' && value.absence !== 'no-response') return { kind: 'not-judged', because: absenceReasons[value.absence] }
  if (answer.kind !== 'limits') return answer
  const limits = limitsIn(answer)
  if (limits.length === 0) return { kind: 'no-limit', because: 'no row fits' }
  if (value.kind === 'absent') return { kind: 'absent', limits }
  return judgeNumber(value.value, value.uncertainty ?? 0, limits, effect, cold)
}

function limitsIn({ upper, lower }: FoundLimits): AppliedLimit[] {
  if (upper && lower) return [upper, lower]
  const one = upper ?? lower
  return one ? [one] : []
}

function judgeNumber(value: number, uncertainty: number, limits: AppliedLimit[], effect: ColdEffect, cold: ColdBearing): Verdict {
  const passed = limits.find(limit => isOutside(value, limit))
  const direction = passed === undefined ? 'within' : passed.bound === 'upper' ? 'above' : 'below'
  if (cold.state !== 'none') {
    const because = coldReason(limits, direction, effect, cold)
    if (because) return { kind: 'cold', because, limits, wouldBe: direction }
  }
  const nearLimit = limits.some(limit => Math.abs(value - limit.value) < uncertainty - TOLERANCE)
  if (passed === undefined || direction === 'within') return { kind: 'within', limits, nearLimit }
  return { kind: 'outside', direction, limit: passed, limits, nearLimit }
}

/** Why cold keeps this value from being read; '' when it does not. */
function coldReason(limits: readonly AppliedLimit[], direction: 'within' | 'above' | 'below', effect: ColdEffect, cold: ColdBearing): string {
  const slow = `cold, not interpretable as slowing: ${cold.words}`
  const masked = `may be masked by cold: ${cold.words}`
  if (effect === 'lengthens' || effect === 'slows') {
    if (direction === 'within') return cold.state === 'part' ? masked : ''
    return direction === (effect === 'lengthens' ? 'above' : 'below') ? slow : ''
  }
  if (direction !== 'within') return ''
  const hidesLoss = effect === 'hides-loss' && limits.some(limit => limit.bound === 'lower')
  const hidesExcess = effect === 'hides-excess' && limits.some(limit => limit.bound === 'upper')
  return hidesLoss || hidesExcess ? masked : ''
}

/** Is the verdict a flag? */
export function isFlag(verdict: Verdict): boolean {
  return verdict.kind === 'outside' || verdict.kind === 'absent'
}
