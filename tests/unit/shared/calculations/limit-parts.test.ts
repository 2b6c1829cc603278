import { describe, expect, it } from 'vitest'
import { canBothApply, equallySpecific, liesInside, mostSpecific } from '#shared/calculations/limit-specificity'
import { fromScale, limitPercentile, limitValue, toScale } from '#shared/calculations/limit-value'
import { ageNumber, ageWords, coveredAges, subgroupWords } from '#shared/calculations/limit-words'
import { isAbove, isBelow, isSame } from '#shared/calculations/tolerance'
import { rowOf, zScore, zScoreByLimit } from '#shared/calculations/z-score'
import { findLimit } from '#shared/calculations/find-limit'
import { limitRow, query, shelfOf, tableOf } from './limit-fixtures'

const person = query().person

describe('comparison', () => {
  it('takes a value on the limit as within, also when binary arithmetic misses it by a hair', () => {
    expect(isAbove(0.2 + 0.4 + 0.3, 0.9)).toBe(false)
    expect(isBelow(3.2 - 2.8, 0.4)).toBe(false)
    expect(isAbove(4.4, 4.4)).toBe(false)
    expect(isBelow(51, 51)).toBe(false)
    expect(isAbove(4.401, 4.4)).toBe(true)
    expect(isBelow(50.999, 51)).toBe(true)
    expect(isSame(0.1 + 0.2, 0.3)).toBe(true)
    expect(isSame(0.3, 0.301)).toBe(false)
  })
})

describe('words of a subgroup', () => {
  it.each([
    [{}, ''],
    [{ sex: 'female', ageMinYears: 50, ageMaxYears: 79 }, 'woman, 50 to 79'],
    [{ sex: 'male', ageMinYears: 4, ageMaxYears: 9 }, 'boy, 4 to 9'],
    [{ sex: 'female', ageMinYears: 4, ageMaxYears: 9 }, 'girl, 4 to 9'],
    [{ sex: 'male' }, 'man'],
    [{ ageMinYears: 50, ageMaxYears: 79, bmiMin: 24 }, '50 to 79, BMI 24 and over'],
    [{ ageMinYears: 19, ageMaxYears: 39, heightMaxCm: 170 }, '19 to 39, height under 170 cm'],
    [{ heightMinCm: 160, heightMaxCm: 170 }, 'height 160 to under 170 cm'],
    [{ ageMinYears: 60 }, '60 and over'],
    [{ ageMaxYears: 39 }, 'up to 39'],
    [{ ageMinYears: 1, ageMaxYears: 1 }, '1'],
    [{ ageMinYears: 4 / 12, ageMaxYears: 7 / 12, ageMaxExclusive: true }, '4 to under 7 months'],
    [{ ageMinYears: 7 / 31 / 12, ageMaxYears: 1 / 12, ageMaxExclusive: true }, '7 to under 31 days'],
    [{ ageMaxYears: 1, ageMaxExclusive: true }, 'under 1'],
  ] as const)('%o is "%s"', (part, words) => {
    expect(subgroupWords(limitRow(part))).toBe(words)
  })

  it.each([[0, '0'], [3 / 31 / 12, '3 days'], [1 / 12, '1 month'], [5.5 / 12, '5 months'], [1, '1'], [52.7, '52']])('age %f is "%s"', (years, words) => {
    expect(ageNumber(years)).toBe(words)
  })

  it('merges touching and overlapping ages', () => {
    const band = (ageMinYears: number | null, ageMaxYears: number | null) => ({ ageMinYears, ageMaxYears, ageMaxExclusive: false })
    expect(coveredAges([band(40, 79), band(19, 39), band(25, 30)])).toBe('19 to 79')
    expect(coveredAges([band(18, null), band(2, 3)])).toBe('2 to 3, 18 and over')
    expect(ageWords(band(null, null))).toBe('')
  })
})

describe('which of two rows is more specific', () => {
  const general = limitRow({ id: 'general' })
  it.each([
    ['same rows', {}, {}, true],
    ['one by sex', {}, { sex: 'female' }, false],
    ['other sexes', { sex: 'male' }, { sex: 'female' }, false],
    ['age inside age', { ageMinYears: 19, ageMaxYears: 79 }, { ageMinYears: 50, ageMaxYears: 79 }, false],
    ['ages that share a year', { ageMinYears: 20, ageMaxYears: 60 }, { ageMinYears: 60, ageMaxYears: 70 }, true],
    ['ages that follow', { ageMinYears: 20, ageMaxYears: 59 }, { ageMinYears: 60, ageMaxYears: 70 }, false],
    ['age against sex', { ageMinYears: 50 }, { sex: 'female' }, true],
    ['heights that follow', { heightMaxCm: 170 }, { heightMinCm: 170 }, false],
    ['heights that overlap', { heightMaxCm: 171 }, { heightMinCm: 170 }, true],
    ['body mass that follows', { bmiMax: 24 }, { bmiMin: 24 }, false],
    ['other bound', { bound: 'upper' }, { bound: 'lower' }, false],
    ['other place', { at: 'wrist' }, { at: 'palm' }, false],
    ['any place against one', { at: null }, { at: 'palm' }, false],
    ['other distance', { distanceMm: 140 }, { distanceMm: 120 }, false],
    ['distance in a range', { distanceMm: 100 }, { distanceMinMm: 80, distanceMaxMm: 120 }, false],
    ['same distance', { distanceMm: 140 }, { distanceMm: 140 }, true],
    ['other direction', { direction: 'antidromic' }, { direction: 'orthodromic' }, false],
    ['context beside a limit', {}, { use: 'context', contextBecause: 'invented' }, false],
  ] as const)('%s: equal %o %o is %s', (_name, one, other, isEqual) => {
    const rows = [limitRow({ id: 'one', ...one }), limitRow({ id: 'other', ...other })]
    expect(equallySpecific(rows)).toEqual(isEqual ? ['rows one and other would apply equally to median-motor-apb latencyMs'] : [])
  })

  it('is decided by lying inside', () => {
    const women = limitRow({ id: 'women', sex: 'female' })
    expect(canBothApply(general, women)).toBe(true)
    expect(liesInside(women, general)).toBe(true)
    expect(liesInside(general, women)).toBe(false)
    expect(mostSpecific([general, women])?.id).toBe('women')
    expect(mostSpecific([])).toBeNull()
    expect(mostSpecific([limitRow({ id: 'a' }), limitRow({ id: 'b' })])).toBeNull()
  })
})

describe('value of a row', () => {
  it.each([
    [{ value: 4.4 }, 4.4],
    [{ value: null, kind: 'mean-sd', mean: 37, sd: 4.38, sdMultiple: 2, bound: 'lower' }, 28.24],
    [{ value: null, kind: 'transformed-mean-sd', scale: 'log', mean: 2, sd: 0.5, sdMultiple: 2, bound: 'lower' }, Math.E],
    [{ value: null, kind: 'transformed-mean-sd', scale: 'sqrt', mean: 4, sd: 0.5, sdMultiple: 2, bound: 'lower' }, 9],
    [{ value: null, kind: 'transformed-mean-sd', scale: 'sqrt', mean: 1, sd: 1, sdMultiple: 2, bound: 'lower' }, 0],
    [{ value: null, kind: 'regression', sdMultiple: 2, regression: { intercept: 10, coefficients: { ageYears: 0.1, bmi: 1 }, residualSd: 1 } }, 45.4],
    [{ value: null, kind: 'mean', mean: 10 }, null],
    [{ value: null, kind: 'percentile', mean: 10, sd: 1, sdMultiple: 2 }, null],
  ] as const)('%o gives %s', (part, value) => {
    const found = limitValue(limitRow(part), person)
    if (value === null) expect(found).toBeNull()
    else expect(found).toBeCloseTo(value, 10)
  })

  it('knows the percentile of mean and SD, and leaves cut-offs without', () => {
    expect(limitPercentile(limitRow({ percentile: 97 }))).toBe(97)
    expect(limitPercentile(limitRow({ kind: 'mean-sd', sdMultiple: 2, bound: 'lower' }))).toBeCloseTo(2.275, 3)
    expect(limitPercentile(limitRow({ kind: 'mean-sd', sdMultiple: 2 }))).toBeCloseTo(97.725, 3)
    expect(limitPercentile(limitRow())).toBeNull()
  })

  it('goes to a scale and back', () => {
    for (const scale of ['raw', 'log', 'sqrt'] as const) expect(fromScale(scale, toScale(scale, 7)!)).toBeCloseTo(7, 12)
    expect(toScale('log', 0)).toBeNull()
    expect(toScale('sqrt', -1)).toBeNull()
    expect(toScale('sqrt', 0)).toBe(0)
    expect(toScale('raw', -1)).toBe(-1)
  })
})

describe('z-score', () => {
  it('is taken on the scale of the source', () => {
    expect(zScore(limitRow({ kind: 'mean-sd', mean: 57, sd: 5 }), 47, person)).toEqual({ kind: 'value', zScore: -2, percentile: expect.closeTo(2.275, 3), scale: 'raw' })
    const log = limitRow({ kind: 'transformed-mean-sd', scale: 'log', mean: 2.2, sd: 0.31, value: 4.9 })
    expect(zScore(log, Math.exp(2.2), person)).toMatchObject({ zScore: expect.closeTo(0, 12), percentile: expect.closeTo(50, 10), scale: 'log' })
  })

  it('is refused where the source allows none', () => {
    expect(zScore(limitRow({ kind: 'percentile', percentile: 97, mean: 1.7, sd: 0.2 }), 2, person).kind).toBe('not-computable')
    expect(zScore(limitRow({ kind: 'mean-sd', mean: 1, sd: 0 }), 2, person).kind).toBe('not-computable')
    expect(zScore(limitRow({ kind: 'transformed-mean-sd', scale: 'log', mean: 2.2, sd: 0.31 }), 0, person)).toEqual({ kind: 'not-computable', because: 'the value has no place on the log scale of the source' })
    expect(zScore(limitRow({ kind: 'regression', regression: { intercept: 1, coefficients: { heightCm: 1 }, residualSd: 1 } }), 1, { ...person, heightCm: null }).kind).toBe('not-computable')
  })

  it('follows an applied limit to its row', () => {
    const table = tableOf([limitRow({ kind: 'mean-sd', value: null, mean: 3.7, sd: 0.5, sdMultiple: 2 })])
    const found = findLimit(shelfOf(table), query())
    if (found.kind !== 'limits') throw new Error('There is a limit.')
    expect(rowOf([table], found.upper!)?.id).toBe('row-1')
    expect(zScoreByLimit([table], found.upper!, 4.7, person)).toMatchObject({ kind: 'value', zScore: expect.closeTo(2, 10) })
    expect(zScoreByLimit([], found.upper!, 4.7, person).kind).toBe('not-computable')
    expect(zScoreByLimit([table], { ...found.upper!, derivation: 'from onset latency' }, 4.7, person).kind).toBe('not-computable')
  })
})
