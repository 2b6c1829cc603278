import type { LimitRow } from '../schemas/reference-table'
import type { LimitPerson } from './limit-query'
import { normalCumulative } from './normal-distribution'

/**
 * The number of one limit row for one person, in the row's unit, or null when the row has none.
 *
 * Stated value: as printed. Mean and SD: mean ± k SD on the row's scale, brought back to the unit. Regression: intercept
 * plus coefficients times items, ± k residual SD, brought back to the unit.
 */
export function limitValue(row: LimitRow, person: LimitPerson): number | null {
  if (row.value !== null) return row.value
  const spread = spreadOf(row, person)
  if (!spread || row.bound === null || row.sdMultiple === undefined) return null
  const shift = row.sdMultiple * spread.sd
  return fromScale(row.scale, row.bound === 'upper' ? spread.centre + shift : spread.centre - shift)
}

/** Centre and standard deviation on the row's scale; null where the source gives none that may be used. */
export function spreadOf(row: LimitRow, person: LimitPerson): { centre: number, sd: number } | null {
  if (row.kind === 'regression') {
    const centre = predicted(row, person)
    return centre === null || !row.regression?.residualSd ? null : { centre, sd: row.regression.residualSd }
  }
  const isGaussian = row.kind === 'mean-sd' || row.kind === 'transformed-mean-sd'
  return isGaussian && row.mean !== undefined && row.sd ? { centre: row.mean, sd: row.sd } : null
}

function predicted(row: LimitRow, person: LimitPerson): number | null {
  if (!row.regression) return null
  let sum = row.regression.intercept
  for (const [item, coefficient] of Object.entries(row.regression.coefficients)) {
    const value = itemOf(item, person)
    if (value === null) return null
    sum += coefficient * value
  }
  return sum
}

/** ageYears, ageYearsSquared, heightCm, heightCmSquared, bmi. An item this list does not know makes the row unusable. */
function itemOf(item: string, person: LimitPerson): number | null {
  const known: Record<string, number | null> = { ageYears: person.ageYears, heightCm: person.heightCm, bmi: person.bmi }
  const base = item.replace(/Squared$/, '')
  const value = known[base] ?? null
  return value === null ? null : base === item ? value : value ** 2
}

/** Back from the scale of the source: log is natural, sqrt is the square root. */
export function fromScale(scale: LimitRow['scale'], value: number): number {
  if (scale === 'log') return Math.exp(value)
  return scale === 'sqrt' ? Math.max(0, value) ** 2 : value
}

/** To the scale of the source; null where the scale has no such value (log of 0). */
export function toScale(scale: LimitRow['scale'], value: number): number | null {
  if (scale === 'raw') return value
  if (value < 0 || (scale === 'log' && value === 0)) return null
  return scale === 'log' ? Math.log(value) : Math.sqrt(value)
}

/**
 * The percentile that a row stands for: as declared, or, for mean ± k SD, that of a normal distribution (derived).
 *
 * @example
 * limitPercentile({ kind: 'mean-sd', bound: 'upper', sdMultiple: 2, percentile: null, … }) // => 97.72…
 */
export function limitPercentile(row: LimitRow): number | null {
  if (row.percentile !== null) return row.percentile
  if (row.sdMultiple === undefined || row.bound === null) return null
  return 100 * normalCumulative(row.bound === 'upper' ? row.sdMultiple : -row.sdMultiple)
}
