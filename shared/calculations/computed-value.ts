import type { Absence } from '../schemas/study'
import type { ComputedValue } from './types'

/**
 * Makers and readers of computed values. Everything that calculates returns one of these: a finite number, a coded
 * absence, or the reason why there is no number.
 */

/**
 * A number, with its expanded uncertainty (k = 2) where it has one. A number that is not finite becomes the reason.
 *
 * @example
 * valueOf(53.75, 2.3) // => { kind: 'value', value: 53.75, uncertainty: 2.3 }
 * valueOf(1 / 0) // => { kind: 'not-computable', because: 'the numbers are out of range' }
 */
export function valueOf(value: number, uncertainty?: number): ComputedValue {
  if (!Number.isFinite(value)) return notComputable('the numbers are out of range')
  // Adding 0 turns -0 into 0: JSON knows no -0.
  if (uncertainty === undefined || !Number.isFinite(uncertainty)) return { kind: 'value', value: value + 0 }
  return { kind: 'value', value: value + 0, uncertainty: Math.abs(uncertainty) }
}

export function absentBecause(absence: Absence): ComputedValue {
  return { kind: 'absent', absence }
}

export function notComputable(because: string): ComputedValue {
  return { kind: 'not-computable', because }
}

/** The number in it, or null. */
export function numberOf(computed: ComputedValue | undefined): number | null {
  return computed?.kind === 'value' ? computed.value : null
}

export function isNoResponse(computed: ComputedValue | undefined): boolean {
  return computed?.kind === 'absent' && computed.absence === 'no-response'
}
