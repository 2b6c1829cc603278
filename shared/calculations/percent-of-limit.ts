import { TOLERANCE } from './tolerance'

/**
 * A value in per cent of a limit, unrounded: "below 80 % of the lower limit" is value < 0.80 x limit. Compared on the
 * unrounded product, since printed cards cut 5.625 to 5.6. Source: arithmetic (derived), checked against the card of
 * Dimachkie MM, Barohn RJ, Katz J, Neurol Clin 2013;31:533-555 (read).
 *
 * @example
 * percentOfLimit(36.5, 41) // => 89.02… (%)
 */
export function percentOfLimit(value: number, limit: number): number | null {
  return limit > 0 && Number.isFinite(value) ? 100 * value / limit : null
}

/**
 * Is the value above this many per cent of the upper limit? With `orAt`, exactly at it counts too.
 *
 * @example
 * abovePercentOf(37.6, 32, 120) // => false
 */
export function abovePercentOf(value: number, limit: number, percent: number, orAt = false): boolean {
  const bar = limit * percent / 100
  return orAt ? value >= bar - TOLERANCE : value > bar + TOLERANCE
}

/**
 * Is the value below this many per cent of the lower limit? With `orAt`, exactly at it counts too.
 *
 * @example
 * belowPercentOf(44, 50, 90) // => true
 */
export function belowPercentOf(value: number, limit: number, percent: number, orAt = false): boolean {
  const bar = limit * percent / 100
  return orAt ? value <= bar + TOLERANCE : value < bar - TOLERANCE
}
