import { readdirSync } from 'node:fs'
import { fileURLToPath } from 'node:url'
import { describe, expect, it } from 'vitest'
import { referenceTable, referenceTables } from '#reference-tables/index'
import { checkTable, type TableRemark } from '#reference-tables/check-table'
import { loadTable } from '#reference-tables/load-table'
import { limitValue } from '#shared/calculations/limit-value'
import { subgroupWords } from '#shared/calculations/limit-words'
import type { LimitRow, ReferenceTable } from '#shared/schemas/reference-table'
import { limitRow, rawTable } from '../shared/calculations/limit-fixtures'

const folder = fileURLToPath(new URL('../../../reference-tables', import.meta.url))
const files = readdirSync(folder).filter(name => name.endsWith('.json'))
const limitsOf = (table: ReferenceTable) => table.rows.filter(row => row.use === 'limit')

describe('the shelf', () => {
  it('lists every file in index.ts (add the missing line there)', () => {
    expect(referenceTables.map(table => `${table.id}.json`).sort()).toEqual(files.sort())
  })

  it('is frozen to the last row', () => {
    for (const table of referenceTables) {
      expect(Object.isFrozen(table) && Object.isFrozen(table.rows) && Object.isFrozen(table.rows[0]) && Object.isFrozen(table.rows[0]!.source)).toBe(true)
    }
  })

  it('finds a set by id and version', () => {
    expect(referenceTable('aanem-ndtf-2016')?.version).toBe(1)
    expect(referenceTable('aanem-ndtf-2016', 2)).toBeUndefined()
    expect(referenceTable('none')).toBeUndefined()
  })

  it('holds all rows of all sources, as limits or as context', () => {
    const counts = referenceTables.map(table => ({ id: table.id, rows: table.rows.length, limits: limitsOf(table).length }))
    expect(counts.map(({ id, rows }) => [id, rows])).toEqual([
      ['aanem-ndtf-2016', 99], ['buschbacher-primary-studies', 68], ['preston-shapiro-adult', 84], ['india-adult', 48],
      ['other-adult-populations', 89], ['other-nerves-and-tests', 76], ['late-responses', 58], ['paediatric', 113],
    ])
    expect(counts.every(({ limits }) => limits > 0)).toBe(true)
  })
})

/** The source prints a lower limit of 0. */
const knownOddities = ['other-adult-populations-041']

describe.each(referenceTables)('$id', (table) => {
  it('says what it is', () => {
    for (const words of [table.title, table.citation, table.population, table.technique, table.declared.words]) expect(words.length).toBeGreaterThan(5)
    expect(table.changes.at(-1)!.version).toBe(table.version)
  })

  it('cites a place for every row', () => {
    expect(table.rows.filter(row => row.source.locator.length < 4).map(row => row.id)).toEqual([])
    expect(table.rows.filter(row => row.definition === '').map(row => row.id)).toEqual([])
  })

  it('stands the checks of an imported table: ids, units, bounds, numbers, distances, age bands', () => {
    expect(checkTable(table).filter(remark => !knownOddities.includes(remark.rowId))).toEqual([])
    expect(JSON.stringify(table)).not.toContain('\u03BC')
  })

  it('says its bands in words, or nothing where a row is for everyone the set covers', () => {
    const withoutAge = (row: LimitRow) => subgroupWords({ ...row, ageMinYears: null, ageMaxYears: null })
    expect(table.rows.filter(row => ![subgroupWords(row), withoutAge(row)].includes(row.subgroup)).map(row => row.id)).toEqual([])
  })
})

describe('values that were recomputed by hand', () => {
  const person = { ageYears: 50, sexForLimits: null, heightCm: 170, bmi: null }
  it.each([
    { set: 'paediatric', row: 'paediatric-014', value: 37 - 2 * 4.38 },
    { set: 'buschbacher-primary-studies', row: 'buschbacher-primary-studies-001', value: 4.7 },
    { set: 'late-responses', row: 'late-responses-010', value: 30.7 },
    { set: 'other-adult-populations', row: 'other-adult-populations-044', value: Math.exp(4.354374 - 0.0021081 * 50 - 0.0023354 * 170 - 1.96 * 0.11161) },
    { set: 'other-nerves-and-tests', row: 'other-nerves-and-tests-036', value: 3.5 },
  ])('$row is $value', ({ set, row, value }) => {
    expect(limitValue(referenceTable(set)!.rows.find(one => one.id === row)!, person)).toBeCloseTo(value, 10)
  })
})

describe('a set that may not load', () => {
  it.each([
    ['an equal row', [limitRow({ id: 'a' }), limitRow({ id: 'b' })], 'rows a and b would apply equally to median-motor-apb latencyMs'],
    ['a doubled id', [limitRow({ id: 'a' }), limitRow({ id: 'a', sex: 'male' })], 'row id a occurs twice'],
    ['a range as limit', [limitRow({ kind: 'range' })], 'row row-1 is a range, which is no limit'],
    ['a mean as limit', [limitRow({ kind: 'mean' })], 'row row-1 is a mean, which is no limit'],
    ['mean and SD of amplitudes', [limitRow({ quantity: 'amplitudeMv', kind: 'mean-sd', mean: 10, sd: 3, sdMultiple: 2, value: null })], 'row row-1 is mean and SD of untransformed amplitudes'],
    ['another percentile', [limitRow({ kind: 'percentile', percentile: 95 })], 'row row-1 is of another percentile than the set declares'],
    ['no value', [limitRow({ value: null })], 'row row-1 gives no value'],
    ['no bound', [limitRow({ bound: null })], 'row row-1 has no bound'],
    ['no technique', [limitRow({ technique: null })], 'row row-1 has no technique or quantity'],
    ['an empty age band', [limitRow({ ageMinYears: 50, ageMaxYears: 40 })], 'row row-1 has an age band that is empty'],
    ['context without a reason', [limitRow({ use: 'context' })], 'row row-1 does not say why it is context'],
  ])('%s', (_name, rows, message) => {
    expect(() => loadTable(rawTable(rows))).toThrow(message)
  })

  it('names the set and its version', () => {
    expect(() => loadTable(rawTable([limitRow({ bound: null })], { id: 'own', version: 3 }))).toThrow('Reference table own, version 3: ')
    expect(() => loadTable({ id: 'own' })).toThrow()
  })

  it('lets a sound one through', () => {
    expect(loadTable(rawTable([limitRow(), limitRow({ id: 'p', sex: 'female', kind: 'percentile', percentile: 97 })])).rows).toHaveLength(2)
  })
})

describe('what the checks find', () => {
  it.each<[string, Partial<LimitRow>[], TableRemark['strength'], string, string]>([
    ['an unknown technique', [{ technique: 'median-motor-xyz' }], 'stop', 'technique', '"median-motor-xyz" is no technique of the catalogue.'],
    ['an unknown quantity', [{ quantity: 'latency' }], 'stop', 'quantity', '"latency" is no quantity of the catalogue.'],
    ['a quantity that is not compared', [{ technique: 'median-ulnar-ring', quantity: 'onsetDifferenceMs', at: null }], 'stop', 'quantity', 'median against ulnar, digit 4 is compared by peakDifferenceMs.'],
    ['the index by another quantity', [{ technique: 'combined-sensory-index', quantity: 'peakDifferenceMs', at: null }], 'stop', 'quantity', 'The combined sensory index is combinedIndexMs.'],
    ['an unknown site', [{ at: 'knee' }], 'stop', 'at', '"knee" is no stimulation site or segment of median-motor-apb'],
    ['a site for a comparison', [{ technique: 'sural-radial', quantity: 'suralRadialRatio', unit: '', bound: 'lower', at: 'ankle', value: 0.21 }], 'stop', 'at', 'leave it blank'],
    ['another unit', [{ unit: 's' }], 'stop', 'unit', 'The unit of latency is ms, not "s". Nothing is converted.'],
    ['a latency bounded from below', [{ bound: 'lower' }], 'check', 'bound', 'A limit of latency is usually an upper one.'],
    ['a value that cannot be', [{ value: 440 }], 'stop', 'value', '440 ms cannot be: latency lies between 0.3 and 100 ms'],
    ['an unusual value', [{ value: 44 }], 'check', 'value', '44 ms is unusual for latency.'],
    ['a negative value', [{ value: -1 }], 'stop', 'value', 'It gives no number for a person in its own bands.'],
    ['a lower limit of 0', [{ quantity: 'amplitudeMv', unit: 'mV', bound: 'lower', value: 0 }], 'check', 'value', 'A lower limit of 0 never calls anything low.'],
    ['a latency without its distance', [{ distanceMm: null }], 'check', 'distance_mm', 'A latency is only comparable at its distance.'],
    ['a hole between ages', [{ id: 'a', ageMinYears: 19, ageMaxYears: 39 }, { id: 'b', ageMinYears: 50, ageMaxYears: 79 }], 'check', 'age_min', 'Ages 40 to 50 have no limit'],
  ])('%s', (_name, rows, strength, column, message) => {
    const found = checkTable({ rows: rows.map((row, index) => limitRow({ id: `row-${index}`, distanceMm: 80, ...row })) })
    expect(found).toContainEqual({ strength, rowId: expect.any(String), column, message: expect.stringContaining(message) })
  })
  it('nothing in a sound row', () => expect(checkTable({ rows: [limitRow({ distanceMm: 80 })] })).toEqual([]))
})
