import type { LimitRow } from '../schemas/reference-table'
import type { LimitQuery } from './limit-query'
import { TOLERANCE, isSame } from './tolerance'
import { oneDecimal } from './bmi'

/** The items that can decide whether a row applies, in the order in which a missing one is named. */
export const fitItems = ['age', 'sex', 'height', 'BMI', 'distance', 'direction', 'amplitude definition'] as const
export type FitItem = (typeof fitItems)[number]
export interface Fit { outside: FitItem[], missing: FitItem[] }
type Outcome = 'fits' | 'outside' | 'missing'

/**
 * How one row fits a query, item by item. Height and BMI minima are inclusive, maxima exclusive; ages are compared in
 * completed years; BMI at one decimal. A row without an item is for everyone; a query without an item that the row
 * asks for is "missing", never a silent match.
 */
export function fitOf(row: LimitRow, query: LimitQuery): Fit {
  const outcomes: Record<FitItem, Outcome> = {
    'age': ageFit(row, query.person.ageYears),
    'sex': exact(row.sex, query.person.sexForLimits),
    'height': band(row.heightMinCm, row.heightMaxCm, query.person.heightCm, needsHeight(row)),
    'BMI': band(row.bmiMin, row.bmiMax, query.person.bmi === null ? null : oneDecimal(query.person.bmi), false),
    'distance': distanceFit(row, query.distanceMm),
    'direction': exact(row.direction, query.direction),
    'amplitude definition': exact(row.amplitudeDefinition, query.amplitudeDefinition),
  }
  return {
    outside: fitItems.filter(item => outcomes[item] === 'outside'),
    missing: fitItems.filter(item => outcomes[item] === 'missing'),
  }
}

const uses = (row: LimitRow, pattern: RegExp): boolean => Object.keys(row.regression?.coefficients ?? {}).some(item => pattern.test(item))
const needsHeight = (row: LimitRow): boolean => uses(row, /^height/)
const needsAge = (row: LimitRow): boolean => uses(row, /^age/)

function ageFit(row: LimitRow, ageYears: number | null): Outcome {
  if (row.ageMinYears === null && row.ageMaxYears === null && !needsAge(row)) return 'fits'
  if (ageYears === null) return 'missing'
  return isAgeIn(row, ageYears) ? 'fits' : 'outside'
}

/** Completed years against years; below one year, or for bands that end in months, the fraction as it is. */
export function isAgeIn(row: Pick<LimitRow, 'ageMinYears' | 'ageMaxYears' | 'ageMaxExclusive'>, ageYears: number): boolean {
  const age = ageYears >= 1 ? Math.floor(ageYears + TOLERANCE) : ageYears
  if (row.ageMinYears !== null && age < row.ageMinYears - TOLERANCE) return false
  if (row.ageMaxYears === null) return true
  return row.ageMaxExclusive ? age < row.ageMaxYears - TOLERANCE : Math.floor(age) <= row.ageMaxYears + TOLERANCE
}

function exact<T>(wanted: T | null, given: T | null): Outcome {
  if (wanted === null) return 'fits'
  if (given === null) return 'missing'
  return wanted === given ? 'fits' : 'outside'
}

function band(min: number | null, max: number | null, given: number | null, needed: boolean): Outcome {
  if (min === null && max === null && !needed) return 'fits'
  if (given === null) return 'missing'
  const aboveMin = min === null || given >= min - TOLERANCE
  const belowMax = max === null || given < max - TOLERANCE
  return aboveMin && belowMax ? 'fits' : 'outside'
}

function distanceFit(row: LimitRow, distanceMm: number | null): Outcome {
  const { distanceMm: fixed, distanceMinMm: min, distanceMaxMm: max } = row
  if (fixed === null && min === null && max === null) return 'fits'
  if (distanceMm === null) return 'missing'
  const isFixed = fixed === null || isSame(fixed, distanceMm)
  const isInRange = (min === null || distanceMm >= min - TOLERANCE) && (max === null || distanceMm <= max + TOLERANCE)
  return isFixed && isInRange ? 'fits' : 'outside'
}
