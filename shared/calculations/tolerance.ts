/**
 * Comparison of measured and computed numbers with limits. Unrounded values, tolerance 1e-9, so that
 * 0.2 + 0.4 + 0.3 is not above 0.9 in binary arithmetic. A value equal to its limit is within.
 */
export const TOLERANCE = 1e-9

/**
 * Is the value beyond an upper limit?
 *
 * @example
 * isAbove(0.2 + 0.4 + 0.3, 0.9) // => false
 */
export function isAbove(value: number, limit: number): boolean {
  return value > limit + TOLERANCE
}

/**
 * Is the value beyond a lower limit?
 *
 * @example
 * isBelow(3.2 - 2.8, 0.4) // => false
 */
export function isBelow(value: number, limit: number): boolean {
  return value < limit - TOLERANCE
}

/** Equal within the tolerance. */
export function isSame(one: number, other: number): boolean {
  return Math.abs(one - other) <= TOLERANCE
}
