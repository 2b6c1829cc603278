import { techniquesNeeded } from '../catalogue/comparisons'
import type { LimitRow, ReferenceTable } from '../schemas/reference-table'
import { derivedVelocityRow } from './derived-velocity-limit'
import { fitItems, fitOf, type Fit } from './limit-fit'
import type { LimitQuery } from './limit-query'
import { mostSpecific } from './limit-specificity'
import { limitPercentile, limitValue } from './limit-value'
import { coveredAges, ageNumber } from './limit-words'
import type { AdoptedSet, AppliedLimit, Policy } from './types'

export type { LimitPerson, LimitQuery } from './limit-query'

/** The part after "no limit: " or "not judged: " is `because`. */
export interface FoundLimits { kind: 'limits', upper?: AppliedLimit, lower?: AppliedLimit }
export type FoundLimit
  = | FoundLimits
    | { kind: 'no-limit', because: string }
    | { kind: 'not-judged', because: string }

export interface LimitShelf { tables: readonly ReferenceTable[], policy: Pick<Policy, 'adopted'> }

/**
 * The limits that judge one number of one person.
 *
 * The first adopted set with a fitting row wins; within it the most specific row. A set that asks for an item that is
 * missing (sex, height, BMI, distance) does not judge: "not judged: height missing"; no other set is asked then, so
 * that nothing falls back silently. A value equal to a limit is within (`isAbove`, `isBelow`).
 * Where a set has no sensory velocity limit, its onset latency at the fixed distance stands for it; such a limit carries
 * `derivation` and is the same measurement as the onset latency: show it, do not count it beside the latency.
 *
 * @example
 * findLimit({ tables, policy }, { technique: 'median-motor-apb', quantity: 'latencyMs', at: 'wrist', direction: null,
 *   amplitudeDefinition: null, distanceMm: 80, person: { ageYears: 52, sexForLimits: 'female', heightCm: 162, bmi: 28.2 } })
 * // => { kind: 'limits', upper: { value: 4.4, subgroup: 'woman, 50 to 79', … } }
 */
export function findLimit(shelf: LimitShelf, query: LimitQuery): FoundLimit {
  if (shelf.policy.adopted.length === 0) return { kind: 'no-limit', because: 'no set adopted here' }
  let reason: string | null = null
  for (const adopted of shelf.policy.adopted) {
    if (!isAdoptedFor(adopted, query.technique)) continue
    const table = shelf.tables.find(one => one.id === adopted.setId && one.version === adopted.version)
    if (!table) {
      reason ??= `the adopted set ${adopted.setId}, version ${adopted.version}, is not at hand`
      continue
    }
    const found = limitsOf(table, adopted, query)
    if (found.kind !== 'no-limit') return found
    reason ??= found.because === '' ? null : found.because
  }
  return { kind: 'no-limit', because: reason ?? 'the adopted sets have none for it' }
}

/** A set adopted for some techniques covers their side differences, and a comparison when all its runs are among them. */
function isAdoptedFor(adopted: AdoptedSet, technique: string): boolean {
  return !adopted.techniques || techniquesNeeded(technique).every(id => adopted.techniques?.includes(id))
}

function limitsOf(table: ReferenceTable, adopted: AdoptedSet, query: LimitQuery): FoundLimit {
  const rows = rowsFor(table, query)
  if (rows.length === 0) return { kind: 'no-limit', because: '' }
  const fits = rows.map(row => ({ row, fit: fitOf(row, query) }))
  const possible = fits.filter(({ fit }) => fit.outside.length === 0)
  if (possible.length === 0) return { kind: 'no-limit', because: whyOutside(fits, query) }
  const missing = fitItems.filter(item => possible.some(({ fit }) => fit.missing.includes(item)))
  if (missing.length > 0) return { kind: 'not-judged', because: missing.map(item => `${item} missing`).join(', ') }
  const limits = (['upper', 'lower'] as const).map(bound => applyBound(table, adopted, query, possible, bound)).filter(limit => limit !== undefined)
  if (limits.length === 0) return { kind: 'not-judged', because: 'rows of the set contradict each other' }
  return { kind: 'limits', ...Object.fromEntries(limits.map(limit => [limit.bound, limit])) }
}

type Fitted = { row: LimitRow, fit: Fit }

function applyBound(table: ReferenceTable, adopted: AdoptedSet, query: LimitQuery, possible: Fitted[], bound: 'upper' | 'lower'): AppliedLimit | undefined {
  const row = mostSpecific(possible.map(({ row }) => row).filter(row => row.bound === bound))
  const value = row && limitValue(row, query.person)
  if (!row || value === null || !Number.isFinite(value)) return undefined
  const derived = row.quantity !== query.quantity
  const limit: AppliedLimit = {
    bound, value, unit: row.unit, setId: table.id, setVersion: table.version, setTitle: table.title, rowId: row.id,
    subgroup: row.subgroup, definition: row.definition, percentile: limitPercentile(row), basis: row.basis,
    verified: adopted.verifiedRows.includes(row.id),
  }
  return derived ? derivedVelocityRow.toVelocity(limit, row) : limit
}

/** Limit rows of the technique and quantity at the place asked for; without them, onset rows that stand for a velocity. */
function rowsFor(table: ReferenceTable, query: LimitQuery): readonly LimitRow[] {
  const own = at(indexOf(table).get(keyOf(query.technique, query.quantity)) ?? [], query)
  if (own.length > 0 || query.quantity !== 'velocityMps') return own
  if ((indexOf(table).get(keyOf(query.technique, query.quantity)) ?? []).length > 0) return own
  return at(indexOf(table).get(keyOf(query.technique, 'onsetLatencyMs')) ?? [], query).filter(derivedVelocityRow.canStand)
}

const at = (rows: readonly LimitRow[], query: LimitQuery): readonly LimitRow[] => rows.filter(row => row.at === null || row.at === query.at)

const keyOf = (technique: string | null, quantity: string | null): string => `${technique}|${quantity}`

/** Tables never change once loaded, so each is sorted once. */
const indices = new WeakMap<ReferenceTable, Map<string, LimitRow[]>>()

function indexOf(table: ReferenceTable): Map<string, LimitRow[]> {
  const known = indices.get(table)
  if (known) return known
  const index = new Map<string, LimitRow[]>()
  for (const row of table.rows) {
    if (row.use !== 'limit') continue
    const key = keyOf(row.technique, row.quantity)
    index.set(key, [...(index.get(key) ?? []), row])
  }
  indices.set(table, index)
  return index
}

/** The reason for people: what the rows ask for that this run or person is not. */
function whyOutside(fits: Fitted[], query: LimitQuery): string {
  const closest = Math.min(...fits.map(({ fit }) => fit.outside.length))
  const near = fits.filter(({ fit }) => fit.outside.length === closest)
  const item = fitItems.find(item => near.some(({ fit }) => fit.outside.includes(item)))
  const rows = near.filter(({ fit }) => item !== undefined && fit.outside.includes(item)).map(({ row }) => row)
  switch (item) {
    case 'age': return `age ${ageNumber(query.person.ageYears ?? 0)} is outside ${coveredAges(rows)}`
    case 'sex': return `the set has none for ${query.person.sexForLimits === 'female' ? 'women' : 'men'}`
    case 'height': return `height ${query.person.heightCm} cm is outside the set`
    case 'BMI': return `BMI ${query.person.bmi} is outside the set`
    case 'distance': return `distance ${query.distanceMm} mm is not the set's ${distanceWords(rows)} mm`
    case 'direction': return `the set's limit is for ${unique(rows.map(row => row.direction))} recording`
    default: return `the set's limit is for amplitude ${unique(rows.map(row => row.amplitudeDefinition?.replaceAll('-', ' ')))}`
  }
}

const unique = (words: (string | null | undefined)[]): string => [...new Set(words.filter(word => !!word))].join(' or ')

const distanceWords = (rows: readonly LimitRow[]): string => unique(rows.map(row =>
  row.distanceMm !== null ? String(row.distanceMm) : `${row.distanceMinMm ?? 'up'} to ${row.distanceMaxMm ?? 'any'}`))
