import type { LimitRow, ReferenceTable } from '#shared/schemas/reference-table'

export interface SetDifference { key: string, row: LimitRow, before: LimitRow | null, after: LimitRow | null, kind: 'added' | 'removed' | 'changed' }

/** What a limit is about: two rows with the same key judge the same values of the same people. */
const keyOf = (row: LimitRow) => [row.technique, row.quantity, row.at, row.direction, row.amplitudeDefinition, row.distanceMm, row.distanceMinMm, row.distanceMaxMm, row.bound, row.ageMinYears, row.ageMaxYears, row.sex, row.heightMinCm, row.heightMaxCm, row.bmiMin, row.bmiMax].join('|')
const saysOf = (row: LimitRow) => JSON.stringify([row.value, row.mean, row.sd, row.sdMultiple, row.scale, row.regression, row.percentile, row.unit, row.use])

/**
 * Two sets side by side: limits that only one has, and those with another value. Equal limits are left out.
 * @example differencesOf(old, next) // => [{ kind: 'changed', before: { value: 4.4, … }, after: { value: 4.5, … } }]
 */
export function differencesOf(before: Pick<ReferenceTable, 'rows'>, after: Pick<ReferenceTable, 'rows'>): SetDifference[] {
  const limits = (table: Pick<ReferenceTable, 'rows'>) => new Map(table.rows.filter(row => row.use === 'limit').map(row => [keyOf(row), row]))
  const [one, other] = [limits(before), limits(after)]
  return [...new Set([...one.keys(), ...other.keys()])].flatMap((key): SetDifference[] => {
    const [was, is] = [one.get(key) ?? null, other.get(key) ?? null]
    const row = is ?? was
    if (!row || (was && is && saysOf(was) === saysOf(is))) return []
    return [{ key, row, before: was, after: is, kind: was && is ? 'changed' : is ? 'added' : 'removed' }]
  })
}
