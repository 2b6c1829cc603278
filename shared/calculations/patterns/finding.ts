import { roundForPrint } from '../round-for-print'
import { TOLERANCE } from '../tolerance'
import type { PatternResult } from '../types'

/** What can be said about a criterion: shown, shown not to be so, or neither. */
export type Truth = 'met' | 'not-met' | 'not-assessable'
export type Basis = PatternResult['basis']
export type Criterion = PatternResult['criteria'][number]

/** The words of a criterion and what they rest on. */
export interface CriterionText { id: string, text: string, basis: Basis }

/** What a criterion came to, with the numbers it used. */
export interface Finding { result: Truth, numbers: string, because?: string }

/** A number that a value is compared with. */
export interface Bar { op: 'above' | 'at-least' | 'below' | 'at-most', value: number }

/**
 * Does the value pass the bar? Unrounded, with the tolerance of every comparison here: 0.2 + 0.4 + 0.3 is not above 0.9.
 *
 * @example
 * passes(6.5, { op: 'above', value: 6.5 }) // => false
 * passes(5.4, { op: 'at-least', value: 5.4 }) // => true
 */
export function passes(value: number, bar: Bar): boolean {
  switch (bar.op) {
    case 'above': return value > bar.value + TOLERANCE
    case 'at-least': return value >= bar.value - TOLERANCE
    case 'below': return value < bar.value - TOLERANCE
    case 'at-most': return value <= bar.value + TOLERANCE
  }
}

/**
 * Prints a value with as many decimals as it takes to stand on the same side of the bar as the value itself.
 *
 * @example
 * printBeside(6.53, 1, { op: 'above', value: 6.5 }) // => '6.53'
 * printBeside(149.6, 0, { op: 'at-least', value: 150 }) // => '149.6'
 */
export function printBeside(value: number, decimals: number, bar: Bar): string {
  for (let more = decimals; more < decimals + 8; more += 1) {
    const text = roundForPrint(value, more)
    if (passes(Number(text), bar) === passes(value, bar)) return text
  }
  return String(value)
}

/**
 * A bar or limit in words: two decimals at most, no needless zeros.
 *
 * @example
 * plainNumber(42.424) // => '42.42'
 * plainNumber(50) // => '50'
 */
export function plainNumber(value: number): string {
  const text = roundForPrint(value, 2)
  if (text.endsWith('.00')) return text.slice(0, -3)
  return text.endsWith('0') ? text.slice(0, -1) : text
}

export const met = (numbers: string, because?: string): Finding => finding('met', numbers, because)
export const notAssessable = (because: string, numbers = ''): Finding => finding('not-assessable', numbers, because)

function finding(result: Truth, numbers: string, because?: string): Finding {
  return because ? { result, numbers, because } : { result, numbers }
}

/** Yes or no, once a number is known. */
export const decided = (isMet: boolean, numbers: string, because?: string): Finding => finding(isMet ? 'met' : 'not-met', numbers, because)

/** The criterion as it stands in the result. */
export function criterion({ id, text, basis }: CriterionText, { result, numbers, because }: Finding): Criterion {
  return because ? { id, text, result, numbers, because, basis } : { id, text, result, numbers, basis }
}

/**
 * Is any of these so? Yes as soon as one is; open while one of the others cannot be assessed.
 *
 * @example
 * anyOf(['not-met', 'not-assessable']) // => 'not-assessable'
 */
export function anyOf(truths: readonly Truth[]): Truth {
  if (truths.includes('met')) return 'met'
  return truths.length === 0 || truths.includes('not-assessable') ? 'not-assessable' : 'not-met'
}

/**
 * Are all of these so? No as soon as one is not; open while one cannot be assessed.
 *
 * @example
 * allOf(['met', 'not-assessable']) // => 'not-assessable'
 */
export function allOf(truths: readonly Truth[]): Truth {
  if (truths.includes('not-met')) return 'not-met'
  return truths.length === 0 || truths.includes('not-assessable') ? 'not-assessable' : 'met'
}

/** The opposite; what cannot be assessed stays so. */
export function notTruth(truth: Truth): Truth {
  if (truth === 'not-assessable') return truth
  return truth === 'met' ? 'not-met' : 'met'
}

/**
 * Are at least so many of these so? Open where those that cannot be assessed would decide it.
 *
 * @example
 * atLeast(2, ['met', 'not-met', 'not-assessable']) // => 'not-assessable'
 */
export function atLeast(needed: number, truths: readonly Truth[]): Truth {
  const count = (truth: Truth) => truths.filter(one => one === truth).length
  if (count('met') >= needed) return 'met'
  return count('met') + count('not-assessable') >= needed ? 'not-assessable' : 'not-met'
}

/** Distinct, in order, the empty ones left out: "no limit; cold". */
export function joined(parts: readonly (string | undefined)[]): string {
  const kept: string[] = []
  for (const part of parts) if (part && !kept.includes(part)) kept.push(part)
  return kept.length === 1 ? kept[0] as string : kept.join('; ')
}

/** The finding with what its numbers are of: "distal latency 5.2 ms". */
export const named = (what: string, one: Finding): Finding => one.numbers ? { ...one, numbers: `${what} ${one.numbers}` } : one

/** The finding without its numbers, where they are said already. */
export const quiet = (one: Finding): Finding => ({ ...one, numbers: '' })

/** The opposite finding, with the same numbers. */
export const negated = (one: Finding): Finding => ({ ...one, result: notTruth(one.result) })

/** All of these: their numbers, and the reasons of those that keep it open. */
export const every = (...findings: Finding[]): Finding => withReasons(allOf(findings.map(one => one.result)), findings)

/** Any of these. */
export const either = (...findings: Finding[]): Finding => withReasons(anyOf(findings.map(one => one.result)), findings)

function withReasons(result: Truth, findings: readonly Finding[]): Finding {
  const numbers = joined(findings.map(one => one.numbers))
  if (result !== 'not-assessable') return { result, numbers }
  return notAssessable(joined(findings.filter(one => one.result === 'not-assessable').map(one => one.because)), numbers)
}
