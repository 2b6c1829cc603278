import { readdirSync } from 'node:fs'
import { fileURLToPath } from 'node:url'
import { describe, expect, it } from 'vitest'
import { referenceTable, referenceTables } from '#reference-tables/index'
import { loadTable } from '#reference-tables/load-table'
import { COMBINED_SENSORY_INDEX, comparisons, techniquesNeeded } from '#shared/catalogue/comparisons'
import { anyQuantity } from '#shared/catalogue/computed-quantities'
import { techniqueOf } from '#shared/catalogue/nerves'
import { limitValue } from '#shared/calculations/limit-value'
import { subgroupWords } from '#shared/calculations/limit-words'
import type { LimitRow, ReferenceTable } from '#shared/schemas/reference-table'
import { limitRow, rawTable } from '../shared/calculations/limit-fixtures'

const folder = fileURLToPath(new URL('../../../reference-tables', import.meta.url))
const files = readdirSync(folder).filter(name => name.endsWith('.json'))
const limitsOf = (table: ReferenceTable) => table.rows.filter(row => row.use === 'limit')

/** Site or segment ids of a technique; the quantity compared for side differences; none for comparisons. */
function placesOf(row: LimitRow): (string | null)[] {
  if (row.technique!.startsWith('side-difference/')) return ['latencyMs', 'onsetLatencyMs', 'peakLatencyMs', 'amplitudeMv', 'amplitudeUv', 'velocityMps', 'hLatencyMs', 'minimumLatencyMs', 'r1Ms', 'r2IpsilateralMs']
  const sites = techniqueOf(row.technique!)?.sites ?? []
  return [null, ...sites.map(site => site.id), ...sites.map(site => site.segment?.id ?? null)]
}

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

describe.each(referenceTables)('$id', (table) => {
  it('says what it is', () => {
    for (const words of [table.title, table.citation, table.population, table.technique, table.declared.words]) expect(words.length).toBeGreaterThan(5)
    expect(table.changes.at(-1)!.version).toBe(table.version)
  })

  it('cites a place for every row', () => {
    expect(table.rows.filter(row => row.source.locator.length < 4).map(row => row.id)).toEqual([])
    expect(table.rows.filter(row => row.definition === '').map(row => row.id)).toEqual([])
  })

  it('uses ids of the catalogue', () => {
    const known = (row: LimitRow) => techniquesNeeded(row.technique!).every(id => techniqueOf(id))
    expect(limitsOf(table).filter(row => !known(row)).map(row => row.id)).toEqual([])
    expect(limitsOf(table).filter(row => !anyQuantity(row.quantity!)).map(row => row.id)).toEqual([])
    expect(limitsOf(table).filter(row => !placesOf(row).includes(row.at)).map(row => row.id)).toEqual([])
  })

  it('has each comparison in a quantity of that comparison', () => {
    const wrong = limitsOf(table).filter((row) => {
      const comparison = comparisons.find(({ id }) => id === row.technique)
      return comparison ? !comparison.quantities.includes(row.quantity!) : row.technique === COMBINED_SENSORY_INDEX && row.quantity !== 'combinedIndexMs'
    })
    expect(wrong.map(row => row.id)).toEqual([])
  })

  it('has the unit of the quantity', () => {
    expect(limitsOf(table).filter(row => row.unit !== anyQuantity(row.quantity!)!.unit).map(row => row.id)).toEqual([])
    expect(JSON.stringify(table)).not.toContain('\u03BC')
  })

  it('bounds latencies from above and velocities and amplitudes from below', () => {
    const wrong = limitsOf(table).filter((row) => {
      const { kind, id } = anyQuantity(row.quantity!)!
      const isLower = kind === 'velocity' ? !/Drop|Difference/.test(id) : kind === 'amplitude' || kind === 'ratio'
      return row.bound !== (isLower ? 'lower' : 'upper')
    })
    expect(wrong.map(row => row.id)).toEqual([])
  })

  it('gives every limit a number for a person in the middle of its bands', () => {
    const without = limitsOf(table).filter((row) => {
      const value = limitValue(row, { ageYears: row.ageMinYears ?? 40, sexForLimits: row.sex, heightCm: row.heightMinCm ?? 165, bmi: row.bmiMin ?? 22 })
      return value === null || !Number.isFinite(value) || value < 0
    })
    expect(without.map(row => row.id)).toEqual([])
  })

  it('says its bands in words, or nothing where a row is for everyone the set covers', () => {
    const withoutAge = (row: LimitRow) => subgroupWords({ ...row, ageMinYears: null, ageMaxYears: null })
    expect(table.rows.filter(row => ![subgroupWords(row), withoutAge(row)].includes(row.subgroup)).map(row => row.id)).toEqual([])
  })

  it('asks every latency of a sensory or standard motor technique for its distance', () => {
    const needs = limitsOf(table).filter(row => ['onsetLatencyMs', 'peakLatencyMs', 'latencyMs'].includes(row.quantity!) && techniqueOf(row.technique!)?.standardDistanceMm)
    const without = needs.filter(row => row.distanceMm === null && row.distanceMinMm === null && (row.ageMaxYears ?? 99) >= 15)
    expect(without.map(row => row.id)).toEqual([])
  })

  it('covers ages without a hole between two rows of one kind', () => {
    const kinds = new Map<string, LimitRow[]>()
    for (const row of limitsOf(table)) {
      const { technique, quantity, at, bound, direction, amplitudeDefinition, distanceMm, sex, heightMinCm, bmiMin } = row
      const key = JSON.stringify([technique, quantity, at, bound, direction, amplitudeDefinition, distanceMm, sex, heightMinCm, bmiMin])
      kinds.set(key, [...kinds.get(key) ?? [], row])
    }
    const end = (row: LimitRow) => row.ageMaxYears === null ? Infinity : row.ageMaxExclusive ? row.ageMaxYears : row.ageMaxYears + 1
    const holes = [...kinds.values()].flatMap((rows) => {
      const sorted = rows.toSorted((a, b) => (a.ageMinYears ?? 0) - (b.ageMinYears ?? 0))
      return sorted.slice(1).filter((row, index) => row.ageMinYears! > Math.max(...sorted.slice(0, index + 1).map(end)) + 1e-9).map(row => row.id)
    })
    expect(holes).toEqual([])
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
