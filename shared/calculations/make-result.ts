import type { ReferenceTable } from '../schemas/reference-table'
import type { Side } from '../schemas/common'
import { absenceLabels } from '../schemas/study'
import type { FoundLimit, LimitQuery } from './find-limit'
import { isFlag, judge, type ColdBearing } from './judge'
import { decimalsFor, quantityInfo } from './quantity-info'
import { roundBesideLimits, roundForPrint } from './round-for-print'
import type { StudyContext } from './study-context'
import type { AppliedLimit, ComputedValue, Result, Verdict } from './types'
import { zScore } from './z-score'

export interface ResultInput {
  key: string
  runId?: string
  rowId?: string
  side?: Side
  quantity: string
  at?: string
  label: string
  typed: boolean
  value: ComputedValue
  how?: Result['how']
  /** What to ask the sets for; left out for what is not meant to be judged. */
  query?: Omit<LimitQuery, 'person' | 'quantity'> & { quantity?: string }
  /** Context for people: judged where a set has a limit, and without one not called "no limit". */
  supporting?: boolean
  cold: ColdBearing
  supersededBy?: string
  /** Why no limit of a set can be used here although it has one. */
  noLimitBecause?: string
}

const noQuestion: FoundLimit = { kind: 'no-limit', because: '' }

/**
 * One number with its limits, verdict and print. Every result of an assessment is made here.
 */
export function makeResult(context: StudyContext, input: ResultInput): Result {
  const info = quantityInfo(input.quantity)
  const answer = askFor(context, input)
  const verdict = verdictOf(context, input, answer, info.cold)
  const limits = 'limits' in verdict ? verdict.limits : []
  const result: Result = {
    key: input.key, quantity: input.quantity, label: input.label, unit: info.unit, typed: input.typed, value: input.value,
    print: printOf(input.value, limits, input.quantity), printUncertainty: '', verdict,
    flagged: isFlag(verdict),
  }
  if (input.runId !== undefined) result.runId = input.runId
  if (input.rowId !== undefined) result.rowId = input.rowId
  if (input.side !== undefined) result.side = input.side
  if (input.at !== undefined) result.at = input.at
  if (input.how) result.how = input.how
  if (!input.typed) result.printUncertainty = printUncertainty(input.value, result.print)
  if (limits.length > 0) addScore(context, result, limits)
  return result
}

function askFor(context: StudyContext, input: ResultInput): FoundLimit {
  if (!input.query) return noQuestion
  if (input.noLimitBecause) return { kind: 'no-limit', because: input.noLimitBecause }
  const answer = context.limits({ ...input.query, quantity: input.query.quantity ?? input.quantity })
  if (answer.kind === 'limits') context.limitsByKey.set(input.key, answer)
  return answer
}

function verdictOf(context: StudyContext, input: ResultInput, answer: FoundLimit, effect: ReturnType<typeof quantityInfo>['cold']): Verdict {
  if (input.supersededBy !== undefined) return { kind: 'superseded', by: input.supersededBy }
  if (!input.query) return { kind: 'none' }
  const standIn = answer.kind === 'limits' ? answer.lower?.derivation ?? answer.upper?.derivation : undefined
  if (standIn !== undefined) return { kind: 'no-limit', because: `its limit comes ${standIn}, which stands for it` }
  const verdict = judge(input.value, answer, effect, input.cold)
  if (verdict.kind === 'no-limit' && input.supporting) return { kind: 'none' }
  if ('limits' in verdict) for (const limit of verdict.limits) context.applied.set(`${limit.setId}/${limit.setVersion}/${limit.rowId}`, limit)
  return verdict
}

function printOf(value: ComputedValue, limits: readonly AppliedLimit[], quantity: string): string {
  if (value.kind === 'absent') return absenceLabels[value.absence]
  if (value.kind === 'not-computable') return 'not computable'
  return roundBesideLimits(value.value, decimalsFor(quantityInfo(quantity), value.value), limits)
}

/** With as many decimals as the value beside it, and one more where it would print as 0. */
function printUncertainty(value: ComputedValue, print: string): string {
  if (value.kind !== 'value' || value.uncertainty === undefined) return ''
  const decimals = print.includes('.') ? print.length - print.indexOf('.') - 1 : 0
  const text = roundForPrint(value.uncertainty, decimals)
  return `± ${Number(text) === 0 && value.uncertainty > 0 ? roundForPrint(value.uncertainty, decimals + 1) : text}`
}

/** z-score and percentile where the row of the limit has a mean and a standard deviation. */
function addScore(context: StudyContext, result: Result, limits: readonly AppliedLimit[]): void {
  const [limit] = limits
  if (result.value.kind !== 'value' || !limit || limit.derivation !== undefined) return
  const table = context.tables.find(one => one.id === limit.setId && one.version === limit.setVersion)
  const row = table && rowsById(table).get(limit.rowId)
  if (!row || (row.kind !== 'mean-sd' && row.kind !== 'transformed-mean-sd' && row.kind !== 'regression')) return
  const score = zScore(row, result.value.value, context.person)
  if (score.kind !== 'value' || !Number.isFinite(score.zScore)) return
  result.zScore = score.zScore + 0
  result.percentile = score.percentile + 0
}

/** Tables never change once loaded, so each is sorted once. */
const rowIndices = new WeakMap<ReferenceTable, Map<string, ReferenceTable['rows'][number]>>()

function rowsById(table: ReferenceTable): Map<string, ReferenceTable['rows'][number]> {
  let index = rowIndices.get(table)
  if (!index) {
    index = new Map(table.rows.map(row => [row.id, row]))
    rowIndices.set(table, index)
  }
  return index
}
