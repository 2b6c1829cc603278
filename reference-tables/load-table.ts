import { equallySpecific } from '#shared/calculations/limit-specificity'
import { referenceTableSchema, type LimitRow, type ReferenceTable } from '#shared/schemas/reference-table'

/**
 * Reads one reference table: the schema, then what a schema cannot say, then frozen for ever.
 * Throws an Error that names the table and every row at fault. For the shipped tables and for a laboratory's own.
 *
 * @example
 * loadTable({ id: 'own-2026', version: 1, …, rows: [] }).rows // => []
 */
export function loadTable(raw: unknown): ReferenceTable {
  const table = referenceTableSchema.parse(raw)
  const problems = [...doubledIds(table.rows), ...table.rows.flatMap(row => problemsOf(row, table)), ...equallySpecific(table.rows)]
  if (problems.length > 0) throw new Error(`Reference table ${table.id}, version ${table.version}: ${problems.join('; ')}.`)
  return deepFreeze(table)
}

function doubledIds(rows: readonly LimitRow[]): string[] {
  const seen = new Set<string>()
  return rows.filter(row => seen.size === seen.add(row.id).size).map(row => `row id ${row.id} occurs twice`)
}

/** What makes a row unfit to judge by; context rows have to say why they are context. */
function problemsOf(row: LimitRow, table: ReferenceTable): string[] {
  if (row.use === 'context') return row.contextBecause ? [] : [`row ${row.id} does not say why it is context`]
  const declared = row.bound === 'upper' ? table.declared.upperPercentile : table.declared.lowerPercentile
  return [
    [!row.technique || !row.quantity, 'has no technique or quantity'],
    [!row.bound, 'has no bound'],
    [row.kind === 'range' || row.kind === 'mean', `is a ${row.kind}, which is no limit`],
    [row.kind === 'mean-sd' && /^amplitude/.test(row.quantity ?? ''), 'is mean and SD of untransformed amplitudes'],
    [row.kind === 'percentile' && row.percentile !== declared, 'is of another percentile than the set declares'],
    [!hasValue(row), 'gives no value'],
    [(row.ageMinYears ?? 0) > (row.ageMaxYears ?? Infinity), 'has an age band that is empty'],
  ].filter(([wrong]) => wrong).map(([, words]) => `row ${row.id} ${words}`)
}

function hasValue(row: LimitRow): boolean {
  if (row.value !== null) return Number.isFinite(row.value)
  const isMeanAndSd = row.mean !== undefined && row.sd !== undefined
  const isRegression = row.kind === 'regression' && row.regression?.residualSd !== undefined
  return row.sdMultiple !== undefined && (isMeanAndSd || isRegression)
}

function deepFreeze<T>(value: T): T {
  if (typeof value === 'object' && value !== null && !Object.isFrozen(value)) {
    Object.freeze(value)
    Object.values(value).forEach(deepFreeze)
  }
  return value
}
