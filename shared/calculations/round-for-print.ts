import { isAbove, isBelow, TOLERANCE } from './tolerance'
import type { AppliedLimit } from './types'

/**
 * The only rounding of the program: half away from zero on the decimal digits, never on the binary ones.
 * Comparison never uses it: values are compared unrounded (tolerance.ts).
 *
 * `(4.35).toFixed(1)` is '4.3' and `3.8 - 2.7` is 1.0999999999999996: twelve significant digits are kept first, so
 * that 4.35 prints as 4.4 and the difference as 1.1.
 *
 * Source: number 1 of this project's decisions on numbers (latency 1 decimal, velocity 0, and so on).
 *
 * @example
 * roundForPrint(53.75, 0) // => '54'
 * roundForPrint(4.35, 1) // => '4.4'
 * roundForPrint(-0.04, 1) // => '0.0'
 */
export function roundForPrint(value: number, decimals: number): string {
  if (!Number.isFinite(value)) return 'not computable'
  const size = Math.abs(value)
  if (size >= 1e12) return value.toPrecision(12)
  const whole = wholeParts(size, decimals)
  const text = decimals === 0 ? String(whole) : withPoint(whole, decimals)
  return value < 0 && whole !== 0 ? `-${text}` : text
}

/** The value in units of its last decimal, rounded; near a half, on the decimal digits. */
function wholeParts(size: number, decimals: number): number {
  const scaled = size * 10 ** decimals
  const below = Math.floor(scaled)
  if (Math.abs(scaled - below - 0.5) > 1e-4) return Math.round(scaled)
  return Math.round(shift(Number(size.toPrecision(12)), decimals))
}

function withPoint(whole: number, decimals: number): string {
  const digits = String(whole).padStart(decimals + 1, '0')
  return `${digits.slice(0, -decimals)}.${digits.slice(-decimals)}`
}

/** Moves the decimal point on the decimal digits, so that 4.35 becomes 43.5 and not 43.49999. */
function shift(value: number, places: number): number {
  const digits = String(value)
  const mark = digits.indexOf('e')
  return Number(mark < 0 ? `${digits}e${places}` : `${digits.slice(0, mark)}e${Number(digits.slice(mark + 1)) + places}`)
}

/**
 * Rounds for print, with as many decimals more as it takes for the printed number to stand on the same side of each
 * limit as the number itself: 50.6 against 51 prints as 50.6, not as 51.
 *
 * @example
 * roundBesideLimits(50.6, 0, [{ bound: 'lower', value: 51 }]) // => '50.6'
 * roundBesideLimits(53.75, 0, [{ bound: 'lower', value: 51 }]) // => '54'
 */
export function roundBesideLimits(value: number, decimals: number, limits: readonly Pick<AppliedLimit, 'value' | 'bound'>[]): string {
  const plain = roundForPrint(value, decimals)
  if (standsWhere(value, plain, limits)) return plain
  for (let more = decimals + 1; more <= decimals + 8; more += 1) {
    const text = roundForPrint(value, more)
    if (standsWhere(value, text, limits)) return text
  }
  return String(value)
}

/** Does the print stand on the same side of every limit as the value? */
function standsWhere(value: number, text: string, limits: readonly Pick<AppliedLimit, 'value' | 'bound'>[]): boolean {
  if (limits.length === 0) return true
  const printed = Number(text)
  return limits.every(limit => isOutside(value, limit) === isOutside(printed, limit))
}

/**
 * Is the value outside this limit? A value exactly on a limit is within; the tolerance of 1e-9 takes up what binary
 * fractions add.
 *
 * @example
 * isOutside(0.2 + 0.4 + 0.3, { bound: 'upper', value: 0.9 }) // => false
 * isOutside(50.6, { bound: 'lower', value: 51 }) // => true
 */
export function isOutside(value: number, limit: Pick<AppliedLimit, 'value' | 'bound'>): boolean {
  return limit.bound === 'upper' ? isAbove(value, limit.value) : isBelow(value, limit.value)
}

/**
 * A limit as it is printed: the decimals of its quantity, and up to two more where those would change it.
 *
 * @example
 * printLimit(4, 1) // => '4.0'
 * printLimit(42.424, 0) // => '42.42'
 */
export function printLimit(value: number, decimals: number): string {
  for (let more = decimals; more < decimals + 2; more += 1) {
    const text = roundForPrint(value, more)
    if (Math.abs(Number(text) - value) < TOLERANCE) return text
  }
  return roundForPrint(value, decimals + 2)
}
