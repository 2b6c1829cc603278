import type { Side } from '../schemas/common'
import { absenceLabels } from '../schemas/study'
import type { FoundLimit } from './find-limit'
import { isFlag, judge, type ColdBearing } from './judge'
import type { LimitAsker } from './limit-asker'
import { decimalsFor, quantityInfo, type QuantityInfo } from './quantity-info'
import { roundBesideLimits, roundForPrint } from './round-for-print'
import type { StudyContext } from './study-context'
import type { AppliedLimit, ComputedValue, Result, Verdict } from './types'
import { zScore } from './z-score'

/** Whose number it is: a row of a run, or a comparison. */
export interface Owner {
  /** `${runId}/${rowId}/` or `compare/${side}/${id}/`. */
  keyStart: string
  runId?: string
  rowId?: string
  side?: Side
  cold: ColdBearing
  supersededBy?: string
}

export interface ResultInput {
  quantity: string
  /** What follows in the key when the quantity alone is not unique. */
  keyEnd?: string
  at?: string
  label: string
  typed: boolean
  value: ComputedValue
  how?: Result['how']
  /** Who knows the limits; left out for what is not meant to be judged. */
  asker?: LimitAsker
  /** Place the question is about; `at` unless given. */
  askAt?: string | null
  /** Context for people: judged where a set has a limit, and without one not called "no limit". */
  supporting?: boolean
  /** Why no limit of a set can be used here although it may have one. */
  noLimitBecause?: string
}

const noQuestion: FoundLimit = { kind: 'no-limit', because: '' }
const noLimits: readonly AppliedLimit[] = []

/**
 * One number with its limits, verdict and print. Every result of an assessment is made here.
 */
export function makeResult(context: StudyContext, owner: Owner, input: ResultInput): Result {
  const info = quantityInfo(input.quantity)
  const key = owner.keyStart + (input.keyEnd ?? input.quantity)
  const answer = askFor(input)
  const verdict = verdictOf(context, owner, input, answer, info)
  const limits = 'limits' in verdict ? verdict.limits : noLimits
  const print = printOf(input.value, limits, info)
  const result: Result = {
    key, quantity: input.quantity, label: input.label, unit: info.unit, typed: input.typed, value: input.value,
    print, printUncertainty: input.typed ? '' : printUncertainty(input.value, print),
    verdict, flagged: isFlag(verdict),
  }
  // Only what there is: a key without a value would not outlive being written as JSON.
  if (owner.runId !== undefined) result.runId = owner.runId
  if (owner.rowId !== undefined) result.rowId = owner.rowId
  if (owner.side !== undefined) result.side = owner.side
  if (input.at !== undefined) result.at = input.at
  if (input.how !== undefined) result.how = input.how
  if (limits.length > 0) addScore(context, result, limits)
  if (answer.kind === 'limits' && limits.length === 0) context.limitsUnsaid.set(result, answer)
  return result
}

function askFor(input: ResultInput): FoundLimit {
  if (!input.asker) return noQuestion
  if (input.noLimitBecause) return { kind: 'no-limit', because: input.noLimitBecause }
  return input.asker.ask(input.quantity, input.askAt === undefined ? input.at ?? null : input.askAt)
}

function verdictOf(context: StudyContext, owner: Owner, input: ResultInput, answer: FoundLimit, info: QuantityInfo): Verdict {
  if (owner.supersededBy !== undefined) return { kind: 'superseded', by: owner.supersededBy }
  if (!input.asker) return { kind: 'none' }
  if (answer.kind === 'no-limit' && input.supporting) return { kind: 'none' }
  const standIn = answer.kind === 'limits' ? answer.lower?.derivation ?? answer.upper?.derivation : undefined
  if (standIn !== undefined) return { kind: 'no-limit', because: `${STANDS_FOR} ${standIn}, which stands for it` }
  const verdict = judge(input.value, answer, info.cold, owner.cold)
  if ('limits' in verdict) for (const limit of verdict.limits) context.applied.add(limit)
  return verdict
}

/** How the reason begins where another measurement of the same response is judged in a number's place. */
export const STANDS_FOR = 'its limit comes'

function printOf(value: ComputedValue, limits: readonly AppliedLimit[], info: QuantityInfo): string {
  if (value.kind === 'absent') return absenceLabels[value.absence]
  if (value.kind === 'not-computable') return 'not computable'
  return roundBesideLimits(value.value, decimalsFor(info, value.value), limits)
}

/** With as many decimals as the value beside it, and one more where it would print as 0. */
function printUncertainty(value: ComputedValue, print: string): string {
  if (value.kind !== 'value' || value.uncertainty === undefined) return ''
  const point = print.indexOf('.')
  const decimals = point < 0 ? 0 : print.length - point - 1
  const text = roundForPrint(value.uncertainty, decimals)
  return `± ${Number(text) === 0 && value.uncertainty > 0 ? roundForPrint(value.uncertainty, decimals + 1) : text}`
}

/** z-score and percentile where the row of the limit has a mean and a standard deviation. */
function addScore(context: StudyContext, result: Result, limits: readonly AppliedLimit[]): void {
  const [limit] = limits
  if (result.value.kind !== 'value' || !limit || limit.derivation !== undefined) return
  const row = context.rowOf(limit)
  if (!row || (row.kind !== 'mean-sd' && row.kind !== 'transformed-mean-sd' && row.kind !== 'regression')) return
  const score = zScore(row, result.value.value, context.person)
  if (score.kind !== 'value' || !Number.isFinite(score.zScore)) return
  result.zScore = score.zScore + 0
  result.percentile = score.percentile + 0
}
