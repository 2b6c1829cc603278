import type { LimitRow } from '../schemas/reference-table'

/**
 * Which of two rows is the more specific one: the row whose every band lies inside the other's. Two rows that can apply
 * to the same run of the same person, and of which neither lies inside the other, make the set fail to load.
 */
interface Interval { from: number, to: number }

/** Half-open: completed years reach to the next birthday. */
const ages = (row: LimitRow): Interval => ({
  from: row.ageMinYears ?? 0,
  to: row.ageMaxYears === null ? Infinity : row.ageMaxExclusive ? row.ageMaxYears : Math.floor(row.ageMaxYears) + 1,
})
const heights = (row: LimitRow): Interval => ({ from: row.heightMinCm ?? 0, to: row.heightMaxCm ?? Infinity })
const indices = (row: LimitRow): Interval => ({ from: row.bmiMin ?? 0, to: row.bmiMax ?? Infinity })
const distances = (row: LimitRow): Interval => ({
  from: row.distanceMm ?? row.distanceMinMm ?? 0,
  // Distances are whole millimetres and both ends inclusive.
  to: (row.distanceMm ?? row.distanceMaxMm ?? Infinity) + 0.5,
})
const intervals = [ages, heights, indices, distances]
const exacts = [(row: LimitRow) => row.sex, (row: LimitRow) => row.at, (row: LimitRow) => row.direction, (row: LimitRow) => row.amplitudeDefinition]

const touches = (a: Interval, b: Interval): boolean => a.from < b.to && b.from < a.to
const lies = (a: Interval, b: Interval): boolean => a.from >= b.from && a.to <= b.to

const isSameBound = (one: LimitRow, other: LimitRow): boolean =>
  one.technique === other.technique && one.quantity === other.quantity && one.bound === other.bound

/** Can both rows apply to one run of one person? */
export function canBothApply(one: LimitRow, other: LimitRow): boolean {
  return isSameBound(one, other)
    && intervals.every(of => touches(of(one), of(other)))
    && exacts.every(of => of(one) === null || of(other) === null || of(one) === of(other))
}

/** Does `one` lie inside `other` in every band? A row lies inside itself. */
export function liesInside(one: LimitRow, other: LimitRow): boolean {
  return intervals.every(of => lies(of(one), of(other))) && exacts.every(of => of(other) === null || of(one) === of(other))
}

/**
 * Pairs of limit rows that would apply equally, as sentences; empty for a sound set.
 *
 * @example
 * equallySpecific(table.rows) // => ['rows a-1 and a-2 would apply equally to median-motor-apb latencyMs']
 */
export function equallySpecific(rows: readonly LimitRow[]): string[] {
  const limits = rows.filter(row => row.use === 'limit')
  const problems: string[] = []
  limits.forEach((one, index) => {
    for (const other of limits.slice(index + 1)) {
      if (canBothApply(one, other) && liesInside(one, other) === liesInside(other, one)) {
        problems.push(`rows ${one.id} and ${other.id} would apply equally to ${one.technique} ${one.quantity}`)
      }
    }
  })
  return problems
}

/**
 * The row that lies inside all others, or null when there is none (a set that was not checked when it was loaded).
 */
export function mostSpecific(rows: readonly LimitRow[]): LimitRow | null {
  const inside = rows.filter(row => rows.every(other => liesInside(row, other)))
  return inside.length === 1 ? inside[0]! : null
}
