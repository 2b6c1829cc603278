import { techniqueOf } from '../../catalogue/nerves'
import type { Technique } from '../../catalogue/types'
import type { Side } from '../../schemas/common'
import type { Run } from '../../schemas/study'
import { countsAsCold } from '../temperature'
import type { AppliedLimit, Result, RunAssessment } from '../types'
import type { HandFacts } from './carpal-tunnel'
import type { Finding } from './finding'
import type { MotorNerve, MotorRun } from './motor-nerves'
import type { PatternInput } from './pattern-input'
import type { SensoryNerve } from './sensory-nerves'

/** One number as a rule sees it. A response looked for and not found is told apart from one that is not known. */
export interface Reading {
  state: 'number' | 'no-response' | 'missing'
  value: number
  /** Why there is no number; '' when there is one. */
  because: string
  result?: Result
}

/** The run that stands for a technique and side. */
export interface RunFacts {
  id: string
  assessment: RunAssessment
  recorded: Run | undefined
  technique: Technique
  /** Why it does not count: "cold: RIGHT hand 28.0 °C, below 32 °C"; '' when it does. */
  cold: string
  /** As rules on motor nerves look at it: made when the first one asks. */
  motor?: MotorRun
  /** The same of a sensory run. */
  isAbnormal?: Noted<Finding>
}

/** A study as the pattern sets look at it; built once per assessment. */
export interface Facts {
  input: PatternInput
  run: (technique: string, side: Side) => RunFacts | undefined
  /** Set when a limit was used that is recalled and that nobody compared with the paper. */
  usedRecalled: boolean
  /**
   * What several sets ask for, made when the first one asks. It stands here and not in a WeakMap beside the rules: there
   * it would keep every assessment alive until the next full collection.
   */
  motorNerves?: readonly MotorNerve[]
  sensoryNerves?: readonly SensoryNerve[]
  hands: Partial<Record<Side, Noted<HandFacts | null>>>
}

/** An answer for several sets, and whether it rests on a recalled limit: then each of them does. */
export interface Noted<T> { answer: T, usedRecalled: boolean }

/** Works an answer out and notes whether it used a recalled limit. */
export function noted<T>(facts: Facts, make: () => T): Noted<T> {
  const before = facts.usedRecalled
  facts.usedRecalled = false
  const one = { answer: make(), usedRecalled: facts.usedRecalled }
  facts.usedRecalled = before
  return one
}

/** Gives a noted answer to the set that is being asked. */
export function recall<T>(facts: Facts, { answer, usedRecalled }: Noted<T>): T {
  facts.usedRecalled ||= usedRecalled
  return answer
}

/** Gathers what was studied; each run once. */
export function factsOf(input: PatternInput): Facts {
  const known = { right: new Map<string, RunFacts | null>(), left: new Map<string, RunFacts | null>() }
  const run = (technique: string, side: Side) => {
    let facts = known[side].get(technique)
    if (facts === undefined) known[side].set(technique, facts = runFacts(input, technique, side) ?? null)
    return facts ?? undefined
  }
  return { input, usedRecalled: false, run, hands: {} }
}

function runFacts(input: PatternInput, technique: string, side: Side): RunFacts | undefined {
  const assessment = input.runFor(technique, side)
  const known = techniqueOf(technique)
  if (!assessment || !known) return undefined
  const recorded = input.recordedRun(assessment.runId)
  const cold = countsAsCold(assessment.cold, recorded ?? {}) ? `cold: ${assessment.cold.because}` : ''
  return { id: assessment.runId, assessment, recorded, technique: known, cold }
}

const absenceReasons = { 'technical': 'not recordable for technical reasons', 'not-done': 'not done', 'stopped': 'stopped at the patient\'s wish' } as const

/** A reading that is not known, and why. */
export const missing = (because: string): Reading => ({ state: 'missing', value: Number.NaN, because })
const notRecorded = missing('not recorded')

/**
 * A number of a run. Nothing of a cold run counts.
 *
 * @example
 * readingOf(facts, facts.run('median-motor-apb', 'right'), 'latencyMs', 'wrist').value // => 5.2 (ms)
 */
export function readingOf(facts: Facts, run: RunFacts | undefined, quantity: string, at?: string): Reading {
  if (!run) return notRecorded
  if (run.cold) return missing(run.cold)
  return readingOfResult(facts.input.resultOf(run.assessment, quantity, at))
}

/** A result as a reading. */
export function readingOfResult(result: Result | undefined): Reading {
  if (!result) return notRecorded
  const { value } = result
  if (value.kind === 'value') return { state: 'number', value: value.value, because: '', result }
  if (value.kind === 'not-computable') return { ...missing(value.because), result }
  if (value.absence === 'no-response') return { state: 'no-response', value: Number.NaN, because: 'no response', result }
  return { ...missing(absenceReasons[value.absence]), result }
}

/** A number of a comparison within a limb; not where one of its runs is cold. */
export function comparisonReading(facts: Facts, id: string, side: Side, quantity: string): Reading {
  const comparison = facts.input.comparisons.find(one => one.id === id && one.side === side)
  if (!comparison) return notRecorded
  for (const runId of comparison.runIds) {
    const assessment = facts.input.runs.find(run => run.runId === runId)
    if (assessment && countsAsCold(assessment.cold, facts.input.recordedRun(runId) ?? {})) return missing(`cold: ${assessment.cold.because}`)
  }
  return readingOfResult(comparison.results.find(result => result.quantity === quantity))
}

/**
 * The limit of the sets in use for a reading, or why there is none: "no limit: no set adopted here",
 * "not judged: height missing".
 */
export function limitOf(facts: Facts, reading: Reading, bound: 'upper' | 'lower'): AppliedLimit | string {
  const limit = facts.input.limitOf(reading.result, bound)
  if (typeof limit !== 'string') {
    if (limit.basis === 'from memory' && !limit.verified) facts.usedRecalled = true
    return limit
  }
  const isNotJudged = reading.result?.verdict.kind === 'not-judged' && reading.state !== 'missing'
  return limit === 'no limit' ? limit : `${isNotJudged ? 'not judged' : 'no limit'}: ${limit}`
}

/** Id of the site that the distal limits are for: the first usual one. */
export function usualSite(technique: Technique): string {
  return (technique.sites.find(site => site.usual) ?? technique.sites[0])?.id ?? ''
}
