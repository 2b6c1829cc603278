import type { LimitRow, ReferenceTable } from '../schemas/reference-table'
import type { LimitPerson } from './limit-query'
import { spreadOf, toScale } from './limit-value'
import { normalCumulative } from './normal-distribution'
import type { AppliedLimit } from './types'

export type ZScore
  = | { kind: 'value', zScore: number, percentile: number, scale: LimitRow['scale'] }
    | { kind: 'not-computable', because: string }

/**
 * z = (x - centre) / SD on the scale on which the source is normal (natural log or square root for skewed amplitudes),
 * and the percentile Phi(z). Only for rows of mean and SD or regression; percentile and cut-off rows have no z-score.
 *
 * Source of the principle: Dorfman and Robinson, AAEM minimonograph 47, Muscle Nerve 1997;20:4-14 (read in part).
 *
 * @example
 * zScore(row({ kind: 'mean-sd', mean: 57, sd: 5 }), 47, person) // => { kind: 'value', zScore: -2, percentile: 2.275…, scale: 'raw' }
 */
export function zScore(row: LimitRow, value: number, person: LimitPerson): ZScore {
  const spread = spreadOf(row, person)
  if (!spread) return { kind: 'not-computable', because: 'the source gives no mean and standard deviation that may be used' }
  const scaled = toScale(row.scale, value)
  if (scaled === null) return { kind: 'not-computable', because: `the value has no place on the ${row.scale} scale of the source` }
  const z = (scaled - spread.centre) / spread.sd
  return { kind: 'value', zScore: z, percentile: 100 * normalCumulative(z), scale: row.scale }
}

/**
 * The z-score of a value by the row that its applied limit came from.
 */
export function zScoreByLimit(tables: readonly ReferenceTable[], limit: AppliedLimit, value: number, person: LimitPerson): ZScore {
  const row = limit.derivation === undefined ? rowOf(tables, limit) : undefined
  return row ? zScore(row, value, person) : { kind: 'not-computable', because: 'the row of the limit is not at hand' }
}

/** The row of a table that an applied limit came from. */
export function rowOf(tables: readonly ReferenceTable[], limit: Pick<AppliedLimit, 'setId' | 'setVersion' | 'rowId'>): LimitRow | undefined {
  return tables.find(table => table.id === limit.setId && table.version === limit.setVersion)?.rows.find(row => row.id === limit.rowId)
}
