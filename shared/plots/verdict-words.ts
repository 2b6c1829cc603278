import { quantities } from '../catalogue/quantities'
import { printLimit } from '../calculations/round-for-print'
import type { AppliedLimit, Result, Verdict } from '../calculations/types'
import type { Tone } from './tokens'

/** The limits a verdict rests on; none when nothing was judged. */
export function limitsOf(verdict: Verdict): AppliedLimit[] {
  return 'limits' in verdict ? verdict.limits : []
}

/** Colour of a value. Outside but within its measurement uncertainty is in doubt; a cold one is cold. */
export function toneOf(result: Result): Tone {
  const { verdict } = result
  if (verdict.kind === 'outside') return verdict.nearLimit ? 'doubt' : 'beyond'
  if (verdict.kind === 'cold') return 'cold'
  if (verdict.kind === 'superseded') return 'faint'
  return result.flagged ? 'beyond' : 'ink'
}

/** The mark before a value: outside is an arrow as well as a colour and a weight; ≈ is nearer to its limit than it was measured. */
export function markOf({ verdict, flagged }: Result): string {
  if (verdict.kind === 'outside') return verdict.direction === 'above' ? '▲' : '▼'
  if (verdict.kind === 'within' && verdict.nearLimit) return '≈'
  return verdict.kind === 'absent' && flagged ? '▼' : ''
}

const unitDecimals: Record<string, number> = { 'ms': 1, 'm/s': 0, 'mV': 1, 'µV': 0, 'mm': 0, '%': 0 }

/** Decimals a quantity is printed with; computed ones go by their unit. */
export function printDecimals(quantity: string, unit: string): number {
  return quantity in quantities ? quantities[quantity as keyof typeof quantities].printDecimals : unitDecimals[unit] ?? 2
}

/** A limit as people read it. @example limitText({ value: 4, unit: 'ms', … }, 'latencyMs') // => '4.0' */
export const limitText = (limit: AppliedLimit, quantity: string): string => printLimit(limit.value, printDecimals(quantity, limit.unit))

/** "≤ 4.4", "≥ 51", "≥ 32, ≤ 60"; '' when there is none. */
export function limitWords(result: Result): string {
  return limitsOf(result.verdict).map(limit => `${limit.bound === 'upper' ? '≤' : '≥'} ${limitText(limit, result.quantity)}`).join(', ')
}

const withUnit = (text: string, unit: string) => unit ? `${text} ${unit}` : text

/** "the upper limit 4.4 ms (woman, 50 to 79)". */
function namedLimit(limit: AppliedLimit, quantity: string): string {
  const group = limit.subgroup ? ` (${limit.subgroup})` : ''
  return `the ${limit.bound} limit ${withUnit(limitText(limit, quantity), limit.unit)}${group}`
}

function judgement(result: Result): string {
  const { verdict } = result
  const named = limitsOf(verdict).map(limit => namedLimit(limit, result.quantity)).join(' and ')
  switch (verdict.kind) {
    case 'outside': return `${verdict.direction} ${namedLimit(verdict.limit, result.quantity)}${verdict.nearLimit ? ', by less than its measurement uncertainty' : ''}`
    case 'within': return `within ${named}${verdict.nearLimit ? ', closer to it than its measurement uncertainty' : ''}`
    case 'absent': return `there is a limit: ${named}`
    case 'cold': return verdict.because
    case 'not-judged': return `not judged: ${verdict.because}`
    case 'no-limit': return `no limit: ${verdict.because}`
    case 'superseded': return 'superseded by the run repeated warm'
    default: return ''
  }
}

/**
 * A result in words, for screen readers and for whoever does not see the drawing.
 *
 * @example verdictWords(latency) // => '5.2 ms, above the upper limit 4.4 ms (woman, 50 to 79)'
 */
export function verdictWords(result: Result): string {
  const number = result.printUncertainty ? `${result.print} ${result.printUncertainty}` : result.print
  const value = result.value.kind === 'value' ? withUnit(number, result.unit) : result.value.kind === 'not-computable' ? `${result.print}: ${result.value.because}` : result.print
  return [value, judgement(result)].filter(Boolean).join(', ')
}
