import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { referenceTable, referenceTables } from '#reference-tables/index'
import { findLimit, type LimitQuery } from '#shared/calculations/find-limit'
import { isAbove, isBelow } from '#shared/calculations/tolerance'
import fixture from '../../../fixtures/limit-check-cases.json'
import { adopt, limitRow, query, shelfOf, tableOf } from './limit-fixtures'

const task = referenceTable('aanem-ndtf-2016')!
const upperOf = (found: ReturnType<typeof findLimit>) => found.kind === 'limits' ? found.upper : undefined
const lowerOf = (found: ReturnType<typeof findLimit>) => found.kind === 'limits' ? found.lower : undefined
const sensory = { direction: 'antidromic', amplitudeDefinition: 'onset-to-peak', distanceMm: 140, at: 'wrist' } as const

describe('limit checks with sources (figures read or recalled, see the fixture)', () => {
  it.each(fixture.cases)('case $case: $technique $quantity $measured against $limit ($rowBasis, $source)', (check) => {
    const patient: { age?: number, ageMonths?: number, sex?: string, height?: number, bmi?: number } = check.patient
    const found = findLimit(shelfOf(referenceTable(check.set)!), {
      technique: check.technique, quantity: check.quantity, at: check.at,
      direction: check.direction as 'antidromic' | null, amplitudeDefinition: check.amplitudeDefinition as 'onset-to-peak' | null, distanceMm: check.distanceMm,
      person: {
        ageYears: patient.age ?? patient.ageMonths! / 12, sexForLimits: patient.sex === 'male' || patient.sex === 'female' ? patient.sex : null,
        heightCm: patient.height ?? null, bmi: patient.bmi ?? null,
      },
    })
    const limit = check.bound === 'upper' ? upperOf(found) : lowerOf(found)
    expect(limit).toMatchObject({ rowId: check.rowId, unit: check.unit, bound: check.bound })
    expect(limit!.value).toBeCloseTo(check.limit, 3)
    const isOutside = check.bound === 'upper' ? isAbove(check.measured, limit!.value) : isBelow(check.measured, limit!.value)
    expect(isOutside ? 'outside' : 'within').toBe(check.expected)
  })
})

describe('a woman of 52, 162 cm, BMI 28.2, on the task force set', () => {
  it.each([
    { of: { technique: 'median-motor-apb', quantity: 'latencyMs' }, bound: 'upper', value: 4.4, subgroup: 'woman, 50 to 79' },
    { of: { technique: 'median-motor-apb', quantity: 'amplitudeMv' }, bound: 'lower', value: 4.2, subgroup: '40 to 59' },
    { of: { technique: 'median-motor-apb', quantity: 'velocityMps', at: 'forearm', distanceMm: 215 }, bound: 'lower', value: 51, subgroup: 'woman, 40 to 79' },
    { of: { technique: 'median-sensory-d2', quantity: 'onsetLatencyMs', ...sensory }, bound: 'upper', value: 3.3, subgroup: '' },
    { of: { technique: 'median-sensory-d2', quantity: 'peakLatencyMs', ...sensory }, bound: 'upper', value: 4, subgroup: '' },
    { of: { technique: 'median-sensory-d2', quantity: 'amplitudeUv', ...sensory }, bound: 'lower', value: 7, subgroup: '50 to 79, BMI 24 and over' },
    { of: { technique: 'ulnar-sensory-d5', quantity: 'onsetLatencyMs', ...sensory }, bound: 'upper', value: 3.1, subgroup: '' },
    { of: { technique: 'ulnar-sensory-d5', quantity: 'peakLatencyMs', ...sensory }, bound: 'upper', value: 4, subgroup: '' },
    { of: { technique: 'ulnar-sensory-d5', quantity: 'amplitudeUv', ...sensory }, bound: 'lower', value: 5, subgroup: '50 to 79, BMI 24 and over' },
    { of: { technique: 'ulnar-motor-adm', quantity: 'latencyMs' }, bound: 'upper', value: 3.7, subgroup: '' },
    { of: { technique: 'ulnar-motor-adm', quantity: 'amplitudeMv' }, bound: 'lower', value: 7.9, subgroup: '' },
    { of: { technique: 'ulnar-motor-adm', quantity: 'velocityMps', at: 'forearm' }, bound: 'lower', value: 52, subgroup: '' },
    { of: { technique: 'ulnar-motor-adm', quantity: 'velocityMps', at: 'across-elbow' }, bound: 'lower', value: 43, subgroup: '' },
    { of: { technique: 'median-ulnar-sensory', quantity: 'onsetDifferenceMs', at: null, distanceMm: 140 }, bound: 'upper', value: 0.5, subgroup: '' },
    { of: { technique: 'median-ulnar-sensory', quantity: 'peakDifferenceMs', at: null, distanceMm: 140 }, bound: 'upper', value: 0.4, subgroup: '' },
    { of: { technique: 'median-ulnar-motor', quantity: 'motorLatencyDifferenceMs', at: null }, bound: 'upper', value: 1.7, subgroup: '50 to 79' },
  ])('$of.technique $of.quantity: $bound $value $subgroup', ({ of, bound, value, subgroup }) => {
    const found = findLimit(shelfOf(task), query(of))
    expect(found).toEqual({ kind: 'limits', [bound]: expect.objectContaining({ value, subgroup, bound, setId: 'aanem-ndtf-2016', basis: 'from memory', verified: false }) })
  })

  it('derives a sensory velocity limit from the onset latency, and says so', () => {
    const found = findLimit(shelfOf(task), query({ technique: 'median-sensory-d2', quantity: 'velocityMps', ...sensory }))
    expect(lowerOf(found)).toMatchObject({ bound: 'lower', unit: 'm/s', percentile: 3, rowId: 'aanem-ndtf-2016-005', derivation: 'from onset latency 3.3 ms at 140 mm' })
    expect(lowerOf(found)!.value).toBeCloseTo(42.42, 2)
    expect(upperOf(found)).toBeUndefined()
  })

  it('derives none at another distance, and none for a motor segment', () => {
    expect(findLimit(shelfOf(task), query({ technique: 'median-sensory-d2', quantity: 'velocityMps', ...sensory, distanceMm: 130 }))).toEqual({ kind: 'no-limit', because: 'distance 130 mm is not the set\'s 140 mm' })
    expect(findLimit(shelfOf(task), query({ quantity: 'velocityMps', at: 'wrist' })).kind).toBe('no-limit')
  })

  it('marks a row that a named person compared with the paper', () => {
    const policy = { adopted: [adopt(task, { verifiedRows: ['aanem-ndtf-2016-046'] })] }
    expect(upperOf(findLimit({ tables: [task], policy }, query()))).toMatchObject({ rowId: 'aanem-ndtf-2016-046', verified: true })
  })
})

describe('why there is no limit', () => {
  const shelf = shelfOf(task)
  it.each([
    { name: 'no set adopted', shelf: { tables: [task], policy: { adopted: [] } }, of: {}, expected: { kind: 'no-limit', because: 'no set adopted here' } },
    { name: 'too young', shelf, of: { person: { ageYears: 17 } }, expected: { kind: 'no-limit', because: 'age 17 is outside 19 to 79' } },
    { name: 'too old', shelf, of: { person: { ageYears: 80 } }, expected: { kind: 'no-limit', because: 'age 80 is outside 19 to 79' } },
    { name: 'infant', shelf, of: { person: { ageYears: 5 / 12 } }, expected: { kind: 'no-limit', because: 'age 5 months is outside 19 to 79' } },
    { name: 'age unknown', shelf, of: { person: { ageYears: null } }, expected: { kind: 'not-judged', because: 'age missing' } },
    { name: 'sex missing, although a row for everyone exists', shelf, of: { person: { sexForLimits: null } }, expected: { kind: 'not-judged', because: 'sex missing' } },
    { name: 'height missing', shelf, of: { technique: 'tibial-motor-ah', quantity: 'velocityMps', at: 'leg', person: { heightCm: null } }, expected: { kind: 'not-judged', because: 'height missing' } },
    { name: 'BMI missing', shelf, of: { technique: 'median-sensory-d2', quantity: 'amplitudeUv', ...sensory, person: { bmi: null } }, expected: { kind: 'not-judged', because: 'BMI missing' } },
    { name: 'height not needed', shelf, of: { technique: 'ulnar-motor-adm', person: { heightCm: null, bmi: null, sexForLimits: null } }, expected: { kind: 'limits', upper: expect.objectContaining({ value: 3.7 }) } },
    { name: 'distance missing', shelf, of: { distanceMm: null }, expected: { kind: 'not-judged', because: 'distance missing' } },
    { name: 'another distance', shelf, of: { distanceMm: 70 }, expected: { kind: 'no-limit', because: 'distance 70 mm is not the set\'s 80 mm' } },
    { name: 'other direction', shelf, of: { technique: 'sural', quantity: 'peakLatencyMs', ...sensory, at: 'calf', direction: 'orthodromic' as const }, expected: { kind: 'no-limit', because: 'the set\'s limit is for antidromic recording' } },
    { name: 'other amplitude definition', shelf, of: { technique: 'sural', quantity: 'amplitudeUv', ...sensory, at: 'calf', amplitudeDefinition: 'baseline-to-peak' as const }, expected: { kind: 'no-limit', because: 'the set\'s limit is for amplitude onset to peak or peak to peak' } },
    { name: 'not in the set', shelf, of: { technique: 'superficial-fibular', quantity: 'peakLatencyMs', ...sensory, at: 'lower-leg' }, expected: { kind: 'no-limit', because: 'the adopted sets have none for it' } },
    { name: 'elbow amplitude', shelf, of: { quantity: 'amplitudeMv', at: 'elbow' }, expected: { kind: 'no-limit', because: 'the adopted sets have none for it' } },
  ])('$name', ({ shelf, of, expected }) => {
    expect(findLimit(shelf, query(of))).toEqual(expected)
  })

  it('names a version that is not at hand', () => {
    const policy = { adopted: [adopt({ id: task.id, version: 9 })] }
    expect(findLimit({ tables: [task], policy }, query())).toEqual({ kind: 'no-limit', because: 'the adopted set aanem-ndtf-2016, version 9, is not at hand' })
  })

  it('says that a set is for the other sex, another height or body mass', () => {
    const men = tableOf([limitRow({ sex: 'male' })])
    expect(findLimit(shelfOf(men), query())).toEqual({ kind: 'no-limit', because: 'the set has none for women' })
    expect(findLimit(shelfOf(tableOf([limitRow({ sex: 'female' })])), query({ person: { sexForLimits: 'male' } }))).toEqual({ kind: 'no-limit', because: 'the set has none for men' })
    expect(findLimit(shelfOf(tableOf([limitRow({ heightMinCm: 170 })])), query())).toEqual({ kind: 'no-limit', because: 'height 162 cm is outside the set' })
    expect(findLimit(shelfOf(tableOf([limitRow({ bmiMax: 24 })])), query())).toEqual({ kind: 'no-limit', because: 'BMI 28.2 is outside the set' })
  })
})

describe('bands', () => {
  const table = tableOf([
    limitRow({ id: 'short', heightMaxCm: 160, value: 1 }),
    limitRow({ id: 'middle', heightMinCm: 160, heightMaxCm: 170, value: 2 }),
    limitRow({ id: 'tall', heightMinCm: 170, value: 3 }),
  ])
  it.each([[159.9, 1], [160, 2], [169.9, 2], [170, 3]])('%f cm takes %i: minimum inclusive, maximum exclusive', (heightCm, value) => {
    expect(upperOf(findLimit(shelfOf(table), query({ person: { heightCm } })))!.value).toBe(value)
  })

  const byBmi = tableOf([limitRow({ id: 'thin', bmiMax: 24, value: 1 }), limitRow({ id: 'other', bmiMin: 24, value: 2 })])
  it.each([[23.94, 1], [23.95, 2], [24, 2]])('BMI %f is compared at one decimal', (bmi, value) => {
    expect(upperOf(findLimit(shelfOf(byBmi), query({ person: { bmi } })))!.value).toBe(value)
  })

  const byAge = tableOf([
    limitRow({ id: 'infant', ageMinYears: 0, ageMaxYears: 4 / 12, ageMaxExclusive: true, value: 1 }),
    limitRow({ id: 'baby', ageMinYears: 4 / 12, ageMaxYears: 1, ageMaxExclusive: true, value: 2 }),
    limitRow({ id: 'child', ageMinYears: 1, ageMaxYears: 17, value: 3 }),
    limitRow({ id: 'adult', ageMinYears: 18, value: 4 }),
  ])
  it.each([[0, 1], [3.99 / 12, 1], [4 / 12, 2], [0.999, 2], [1, 3], [17, 3], [17.9, 3], [18, 4], [90, 4]])('age %f takes %i', (ageYears, value) => {
    expect(upperOf(findLimit(shelfOf(byAge), query({ person: { ageYears } })))!.value).toBe(value)
  })

  it('names the ages that rows cover together, with gaps', () => {
    const gaps = tableOf([limitRow({ id: 'a', ageMinYears: 20, ageMaxYears: 39 }), limitRow({ id: 'b', ageMinYears: 40, ageMaxYears: 49 }), limitRow({ id: 'c', ageMinYears: 60, ageMaxYears: 79 })])
    expect(findLimit(shelfOf(gaps), query({ person: { ageYears: 55 } }))).toEqual({ kind: 'no-limit', because: 'age 55 is outside 20 to 49, 60 to 79' })
  })

  const ranged = tableOf([limitRow({ distanceMinMm: 80, distanceMaxMm: 120 })])
  it.each([[79, 'no-limit'], [80, 'limits'], [120, 'limits'], [121, 'no-limit']])('distance %i mm of 80 to 120: %s', (distanceMm, kind) => {
    expect(findLimit(shelfOf(ranged), query({ distanceMm })).kind).toBe(kind)
  })
})

describe('which set and which row', () => {
  const general = limitRow({ id: 'general', value: 4.5 })
  const women = limitRow({ id: 'women', value: 4.4, sex: 'female' })
  const olderWomen = limitRow({ id: 'older-women', value: 4.3, sex: 'female', ageMinYears: 50, ageMaxYears: 79 })

  it('takes the most specific row', () => {
    const found = findLimit(shelfOf(tableOf([general, olderWomen, women])), query())
    expect(upperOf(found)!.rowId).toBe('older-women')
  })

  it('takes the first adopted set that has a fitting row', () => {
    const children = tableOf([limitRow({ id: 'c', ageMaxYears: 17, value: 3 })], { id: 'children' })
    const adults = tableOf([limitRow({ id: 'a', value: 4.5 })], { id: 'adults' })
    expect(upperOf(findLimit(shelfOf(children, adults), query()))!.setId).toBe('adults')
    expect(upperOf(findLimit(shelfOf(children, adults), query({ person: { ageYears: 9 } })))!.setId).toBe('children')
  })

  it('asks no other set when the first one lacks an item', () => {
    const banded = tableOf([limitRow({ id: 'h', heightMinCm: 100 })], { id: 'banded' })
    const plain = tableOf([limitRow({ id: 'p' })], { id: 'plain' })
    expect(findLimit(shelfOf(banded, plain), query({ person: { heightCm: null } }))).toEqual({ kind: 'not-judged', because: 'height missing' })
  })

  it('uses a set only for the techniques it was adopted for, their side differences and whole comparisons', () => {
    const policy = { adopted: [adopt(task, { techniques: ['ulnar-motor-adm', 'median-motor-apb'] })] }
    const kindOf = (part: Parameters<typeof query>[0]) => findLimit({ tables: [task], policy }, query(part)).kind
    expect(kindOf({})).toBe('limits')
    expect(kindOf({ technique: 'median-ulnar-motor', quantity: 'motorLatencyDifferenceMs', at: null })).toBe('limits')
    expect(kindOf({ technique: 'sural', quantity: 'peakLatencyMs', ...sensory, at: 'calf' })).toBe('no-limit')
    expect(kindOf({ technique: 'median-ulnar-sensory', quantity: 'onsetDifferenceMs', at: null, distanceMm: 140 })).toBe('no-limit')
    const studies = referenceTable('buschbacher-primary-studies')!
    const one = { adopted: [adopt(studies, { techniques: ['fibular-motor-edb'] })] }
    expect(findLimit({ tables: [studies], policy: one }, query({ technique: 'side-difference/fibular-motor-edb', quantity: 'sideDifferenceMs', at: 'latencyMs' })).kind).toBe('limits')
  })

  it('computes mean and SD, and a regression on the log scale', () => {
    const byMean = tableOf([limitRow({ kind: 'mean-sd', value: null, mean: 3.7, sd: 0.5, sdMultiple: 2 })])
    expect(upperOf(findLimit(shelfOf(byMean), query()))).toMatchObject({ value: 4.7, percentile: expect.closeTo(97.725, 3) })
    const regression = { intercept: 3.712515, coefficients: { ageYearsSquared: -0.0000956, heightCm: -0.0115883 }, residualSd: 0.51137 }
    const dorsal = tableOf([limitRow({ bound: 'lower', kind: 'regression', value: null, scale: 'log', sdMultiple: 1.96, regression })])
    const found = findLimit(shelfOf(dorsal), query({ person: { ageYears: 50, heightCm: 170 } }))
    expect(lowerOf(found)!.value).toBeCloseTo(1.651, 3)
    expect(findLimit(shelfOf(dorsal), query({ person: { heightCm: null } }))).toEqual({ kind: 'not-judged', because: 'height missing' })
    expect(findLimit(shelfOf(dorsal), query({ person: { ageYears: null } }))).toEqual({ kind: 'not-judged', because: 'age missing' })
  })

  it('answers no number for a regression on an item it does not know', () => {
    const odd = tableOf([limitRow({ bound: 'lower', kind: 'regression', value: null, sdMultiple: 2, regression: { intercept: 1, coefficients: { shoeSize: 1 }, residualSd: 1 } })])
    expect(findLimit(shelfOf(odd), query()).kind).toBe('not-judged')
  })
})

describe('for every person and every set', () => {
  const person = fc.record({
    ageYears: fc.option(fc.double({ min: 0, max: 110, noNaN: true }), { nil: null }), sexForLimits: fc.constantFrom('female', 'male', null),
    heightCm: fc.option(fc.double({ min: 30, max: 230, noNaN: true }), { nil: null }), bmi: fc.option(fc.double({ min: 8, max: 80, noNaN: true }), { nil: null }),
  })
  const rows = new Map(referenceTables.flatMap(table => table.rows.filter(row => row.use === 'limit').map(row => [row.id, { table, row }])))
  const rowId = fc.constantFrom(...rows.keys())
  const ask = (id: string, person: LimitQuery['person']) => {
    const { table, row } = rows.get(id)!
    const { technique, quantity, at, direction, amplitudeDefinition } = row
    return findLimit(shelfOf(table), { technique: technique!, quantity: quantity!, at, direction, amplitudeDefinition, distanceMm: row.distanceMm ?? row.distanceMinMm, person })
  }

  it('finds finite limits of the right row, or says why not', () => {
    fc.assert(fc.property(rowId, person, (id, person) => {
      const found = ask(id, person)
      if (found.kind !== 'limits') {
        expect(found.because).not.toBe('')
        return
      }
      expect(found.upper ?? found.lower).toBeDefined()
      for (const limit of [found.upper, found.lower]) if (limit) expect(Number.isFinite(limit.value)).toBe(true)
    }), { numRuns: 500 })
  })

  it('never judges with less than it needs: taking an item away gives the same limit or none', () => {
    fc.assert(fc.property(rowId, person, fc.constantFrom('ageYears', 'sexForLimits', 'heightCm', 'bmi'), (id, person, item) => {
      const less = ask(id, { ...person, [item]: null })
      if (less.kind === 'limits') expect(less).toEqual(ask(id, person))
    }), { numRuns: 500 })
  })
})
