import * as z from 'zod'
import type { Assessment } from '../calculations/types'
import { nerveLabels } from '../catalogue/nerve-labels'
import { techniqueOf } from '../catalogue/nerves'
import { sides, type Side } from '../schemas/common'
import { idSchema } from '../schemas/common'

/**
 * What in a study makes a phrase fit, or a finding call for prompt contact. Each is a fact that the assessment holds
 * already; none of them concludes anything.
 */
export const conditionSchema = z.discriminatedUnion('kind', [
  /** A published check list is met, by its id. */
  z.object({ kind: z.literal('pattern-met'), pattern: idSchema }),
  /** A result of this nerve is outside its limit, or absent. */
  z.object({ kind: z.literal('nerve-flagged'), nerve: idSchema }),
  /** Results were judged and none is outside. */
  z.object({ kind: z.literal('none-outside') }),
])
export type Condition = z.infer<typeof conditionSchema>

/** Whether a condition holds, on which sides, and why in words. */
export interface ConditionResult { met: boolean, sides: Side[], because: string }

const nerveOf = (technique: string) => techniqueOf(technique)?.nerve ?? technique

function patternResult(pattern: string, { patterns }: Assessment): ConditionResult {
  const met = patterns.filter(each => each.id === pattern && each.outcome.met === 'met')
  const because = met.map(each => `${each.side ? `${each.side.toUpperCase()}: ` : ''}${each.title}: ${each.outcome.label}`).join('; ')
  return { met: met.length > 0, sides: sides.filter(side => met.some(each => each.side === side)), because }
}

function nerveResult(nerve: string, assessment: Assessment): ConditionResult {
  const runs = assessment.runs.filter(run => nerveOf(run.technique) === nerve && run.results.some(result => result.flagged))
  return { met: runs.length > 0, sides: sides.filter(side => runs.some(run => run.side === side)), because: runs.map(run => `${run.title}: outside`).join('; ') }
}

function noneResult(assessment: Assessment): ConditionResult {
  const judged = assessment.runs.some(run => run.results.some(({ verdict }) => verdict.kind === 'within'))
  return { met: judged && assessment.flagged.length === 0, sides: [], because: 'no value is outside its limit' }
}

/** @example conditionResult({ kind: 'nerve-flagged', nerve: 'median' }, assessment) // => { met: true, sides: ['right'], because: 'RIGHT median motor …: outside' } */
export function conditionResult(condition: Condition, assessment: Assessment): ConditionResult {
  if (condition.kind === 'pattern-met') return patternResult(condition.pattern, assessment)
  return condition.kind === 'nerve-flagged' ? nerveResult(condition.nerve, assessment) : noneResult(assessment)
}

/** All conditions together: met when each is, on the sides that all of them share. */
export function allConditions(conditions: readonly Condition[], assessment: Assessment): ConditionResult {
  const results = conditions.map(condition => conditionResult(condition, assessment))
  const sided = results.filter(result => result.sides.length > 0)
  return {
    met: results.length > 0 && results.every(result => result.met) && (sided.length === 0 || sides.some(side => sided.every(result => result.sides.includes(side)))),
    sides: sided.length > 0 ? sides.filter(side => sided.every(result => result.sides.includes(side))) : [],
    because: results.map(result => result.because).join('; '),
  }
}

/** @example conditionWords({ kind: 'nerve-flagged', nerve: 'median' }, []) // => 'median: a value is outside' */
export function conditionWords(condition: Condition, patterns: readonly { id: string, title: string }[]): string {
  if (condition.kind === 'none-outside') return 'no value is outside'
  if (condition.kind === 'nerve-flagged') return `${nerveLabels[condition.nerve] ?? condition.nerve}: a value is outside`
  return `met: ${patterns.find(pattern => pattern.id === condition.pattern)?.title ?? condition.pattern}`
}
