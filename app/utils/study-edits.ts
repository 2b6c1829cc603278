import type { QuantityId } from '#shared/catalogue/quantities'
import type { Entry, Run, RunRow, Study } from '#shared/schemas/study'

/** What one cell holds: an entry, a step of an ordinal scale, a series, or nothing. */
export type CellContent = Entry | string | Entry[] | null

/** What stands in a cell. @example cellContent(row, 'latencyMs') // => 3.4 */
export function cellContent(row: RunRow, field: string): CellContent {
  if (field === 'series') return row.series ?? null
  if (field.startsWith('ordinal:')) return row.ordinals?.[field.slice('ordinal:'.length)] ?? null
  return row.values[field as QuantityId] ?? null
}

function without<T extends object>(record: T, key: string): T {
  return Object.fromEntries(Object.entries(record).filter(([name]) => name !== key)) as T
}

function rowWith(row: RunRow, field: string, content: CellContent): RunRow {
  if (field === 'series') return content === null ? without(row, 'series') : { ...row, series: content as Entry[] }
  if (field.startsWith('ordinal:')) {
    const id = field.slice('ordinal:'.length)
    return { ...row, ordinals: content === null ? without(row.ordinals ?? {}, id) : { ...row.ordinals, [id]: content as string } }
  }
  return { ...row, values: content === null ? without(row.values, field) : { ...row.values, [field]: content as Entry } }
}

export const sameContent = (a: CellContent, b: CellContent) => a === b || JSON.stringify(a) === JSON.stringify(b)

/**
 * The study with one cell changed. Only the run and row of that cell are new objects, so that nothing else is drawn again;
 * where the cell holds this already it is the same study.
 *
 * @example withCell(study, 'row1', 'latencyMs', 4.2)
 */
export function withCell(study: Study, rowId: string, field: string, content: CellContent): Study {
  const found = findRow(study, rowId)
  if (!found || sameContent(cellContent(found.row, field), content)) return study
  const inRun = (run: Run) => run === found.run
  return { ...study, runs: study.runs.map(run => inRun(run) ? { ...run, rows: run.rows.map(row => row.id === rowId ? rowWith(row, field, content) : row) } : run) }
}

/** Row and run of a row id; undefined when it was removed. */
export function findRow(study: Study, rowId: string): { run: Run, row: RunRow, index: number } | undefined {
  for (const run of study.runs) {
    const index = run.rows.findIndex(row => row.id === rowId)
    if (index >= 0) return { run, row: run.rows[index]!, index }
  }
  return undefined
}
