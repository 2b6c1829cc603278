import { notComputable, valueOf } from './computed-value'
import type { ComputedValue } from './types'

/**
 * Difference between the sides in per cent: how much smaller the smaller is, of the larger.
 *
 * difference = 100 x (1 - smaller / larger). Source: from memory (Buschbacher; textbooks). A blanket limit of 50 % is a
 * question to the reader, never a flag; the limits of the set in use are flags.
 *
 * @example
 * sideDifferencePercent(0.2, 1.4) // => { kind: 'value', value: 85.71… } (%)
 */
export function sideDifferencePercent(right: number, left: number): ComputedValue {
  const larger = Math.max(right, left)
  if (!(larger > 0)) return notComputable('neither side is above 0')
  return valueOf(100 * (1 - Math.min(right, left) / larger))
}

/**
 * Difference between the sides in the unit of the quantity, without sign.
 *
 * @example
 * sideDifference(5.2, 3.9, 0.1) // => { kind: 'value', value: 1.3, uncertainty: 0.14 } (ms)
 */
export function sideDifference(right: number, left: number, uncertaintyRight?: number, uncertaintyLeft = uncertaintyRight): ComputedValue {
  const uncertainty = uncertaintyRight === undefined || uncertaintyLeft === undefined ? undefined : Math.hypot(uncertaintyRight, uncertaintyLeft)
  return valueOf(Math.abs(right - left), uncertainty)
}

/**
 * Smaller over larger side, a pure number. Source: common practice.
 *
 * @example
 * sideRatio(2, 5) // => { kind: 'value', value: 0.4 }
 */
export function sideRatio(right: number, left: number): ComputedValue {
  const larger = Math.max(right, left)
  if (!(larger > 0)) return notComputable('neither side is above 0')
  return valueOf(Math.min(right, left) / larger)
}
