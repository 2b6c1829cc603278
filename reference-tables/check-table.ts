import { COMBINED_SENSORY_INDEX, comparisons, techniquesNeeded } from '#shared/catalogue/comparisons'
import { anyQuantity } from '#shared/catalogue/computed-quantities'
import { techniqueOf } from '#shared/catalogue/nerves'
import { limitValue } from '#shared/calculations/limit-value'
import type { LimitRow, ReferenceTable } from '#shared/schemas/reference-table'

/** What is odd about a row beyond what `loadTable` refuses. stop: it cannot judge. check: look again before it is stored. */
export interface TableRemark { strength: 'stop' | 'check', rowId: string, column: string, message: string }

const sideDifferencePlaces = ['latencyMs', 'onsetLatencyMs', 'peakLatencyMs', 'amplitudeMv', 'amplitudeUv', 'velocityMps', 'hLatencyMs', 'minimumLatencyMs', 'r1Ms', 'r2IpsilateralMs']

/** Site or segment ids of a technique; the quantity compared for side differences; none for comparisons. */
export function placesOf(technique: string): (string | null)[] {
  if (technique.startsWith('side-difference/')) return sideDifferencePlaces
  const sites = techniqueOf(technique)?.sites ?? []
  return [null, ...sites.flatMap(site => [site.id, site.segment?.id ?? null])]
}

/**
 * Checks the limits of a table against the catalogue: ids, units, sides of bounds, distances, plausible numbers, holes
 * between age bands. Shipped sets and a laboratory's own are held to the same.
 *
 * @example
 * checkTable(table) // => [{ strength: 'stop', rowId: 'r-3', column: 'unit', message: 'The unit of latency is ms.' }]
 */
export function checkTable(table: Pick<ReferenceTable, 'rows'>): TableRemark[] {
  const limits = table.rows.filter(row => row.use === 'limit')
  return [...limits.flatMap(row => [...wrongIds(row), ...wrongUnit(row), ...wrongBound(row), ...oddValue(row), ...missingDistance(row)]), ...ageHoles(limits)]
}

const remark = (strength: TableRemark['strength'], row: LimitRow, column: string, message: string): TableRemark => ({ strength, rowId: row.id, column, message })

function wrongIds(row: LimitRow): TableRemark[] {
  const { technique, quantity, at } = row
  if (!technique || !techniquesNeeded(technique).every(id => techniqueOf(id))) return [remark('stop', row, 'technique', `"${technique ?? ''}" is no technique of the catalogue.`)]
  if (!quantity || !anyQuantity(quantity)) return [remark('stop', row, 'quantity', `"${quantity ?? ''}" is no quantity of the catalogue.`)]
  const comparison = comparisons.find(({ id }) => id === technique)
  if (comparison && !comparison.quantities.includes(quantity)) return [remark('stop', row, 'quantity', `${comparison.label} is compared by ${comparison.quantities.join(' or ')}.`)]
  if (technique === COMBINED_SENSORY_INDEX && quantity !== 'combinedIndexMs') return [remark('stop', row, 'quantity', 'The combined sensory index is combinedIndexMs.')]
  return placesOf(technique).includes(at) ? [] : [remark('stop', row, 'at', `"${at ?? ''}" is no stimulation site or segment of ${technique}: ${placesOf(technique).filter(Boolean).join(', ') || 'leave it blank'}.`)]
}

function wrongUnit(row: LimitRow): TableRemark[] {
  const quantity = anyQuantity(row.quantity ?? '')
  return !quantity || row.unit === quantity.unit ? [] : [remark('stop', row, 'unit', `The unit of ${quantity.label} is ${quantity.unit || 'none'}, not "${row.unit}". Nothing is converted.`)]
}

/** Latencies are bounded from above, velocities and amplitudes from below. */
export function usualBound(quantityId: string): 'upper' | 'lower' | null {
  const quantity = anyQuantity(quantityId)
  if (!quantity) return null
  if (quantity.kind === 'velocity') return /Drop|Difference/.test(quantity.id) ? 'upper' : 'lower'
  return quantity.kind === 'amplitude' || quantity.kind === 'ratio' ? 'lower' : 'upper'
}

function wrongBound(row: LimitRow): TableRemark[] {
  const usual = usualBound(row.quantity ?? '')
  return !usual || row.bound === usual ? [] : [remark('check', row, 'bound', `A limit of ${anyQuantity(row.quantity ?? '')?.label} is usually an ${usual} one.`)]
}

/** The number for a person in the middle of the row's bands. */
function oddValue(row: LimitRow): TableRemark[] {
  const quantity = anyQuantity(row.quantity ?? '')
  const value = limitValue(row, { ageYears: row.ageMinYears ?? 40, sexForLimits: row.sex, heightCm: row.heightMinCm ?? 165, bmi: row.bmiMin ?? 22 })
  if (value === null || !Number.isFinite(value) || value < 0) return [remark('stop', row, 'value', 'It gives no number for a person in its own bands.')]
  if (value === 0 && row.bound === 'lower') return [remark('check', row, 'value', 'A lower limit of 0 never calls anything low.')]
  const range = quantity && 'possible' in quantity ? quantity.possible : undefined
  if (range && (value < range.min || value > range.max)) return [remark('stop', row, 'value', `${value} ${row.unit} cannot be: ${quantity?.label} lies between ${range.min} and ${range.max} ${row.unit}. Is it the right unit?`)]
  const usual = quantity && 'usual' in quantity ? quantity.usual : undefined
  return usual && (value < usual.min || value > usual.max) ? [remark('check', row, 'value', `${value} ${row.unit} is unusual for ${quantity?.label}.`)] : []
}

const needDistance = ['onsetLatencyMs', 'peakLatencyMs', 'latencyMs']

function missingDistance(row: LimitRow): TableRemark[] {
  const needs = needDistance.includes(row.quantity ?? '') && techniqueOf(row.technique ?? '')?.standardDistanceMm && (row.ageMaxYears ?? 99) >= 15
  return needs && row.distanceMm === null && row.distanceMinMm === null ? [remark('check', row, 'distance_mm', 'A latency is only comparable at its distance. Without one it judges every distance.')] : []
}

const end = (row: LimitRow) => row.ageMaxYears === null ? Infinity : row.ageMaxExclusive ? row.ageMaxYears : row.ageMaxYears + 1

/** Ages between two bands of one kind for which nothing judges. */
function ageHoles(limits: readonly LimitRow[]): TableRemark[] {
  const kinds = new Map<string, LimitRow[]>()
  for (const row of limits) {
    const { technique, quantity, at, bound, direction, amplitudeDefinition, distanceMm, sex, heightMinCm, bmiMin } = row
    const key = JSON.stringify([technique, quantity, at, bound, direction, amplitudeDefinition, distanceMm, sex, heightMinCm, bmiMin])
    kinds.set(key, [...kinds.get(key) ?? [], row])
  }
  return [...kinds.values()].flatMap((rows) => {
    const sorted = rows.toSorted((a, b) => (a.ageMinYears ?? 0) - (b.ageMinYears ?? 0))
    return sorted.slice(1).flatMap((row, index) => {
      const before = Math.max(...sorted.slice(0, index + 1).map(end))
      return (row.ageMinYears ?? 0) > before + 1e-9 ? [remark('check', row, 'age_min', `Ages ${before} to ${row.ageMinYears} have no limit: the band before ends earlier.`)] : []
    })
  })
}
