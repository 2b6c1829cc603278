/** One place in the grid. A field that starts with `=` is computed: it can be reached and opened, not typed into. */
export interface CellAddress { runId: string, rowId: string, field: string }
export interface GridRow { rowId: string, fields: string[] }
export interface GridSheet { runId: string, rows: GridRow[] }

export type GridMove = 'left' | 'right' | 'up' | 'down' | 'next' | 'previous' | 'home' | 'end' | 'first' | 'last'

export const isComputedField = (field: string) => field.startsWith('=')

interface FlatRow extends GridRow { runId: string }
const flatten = (sheets: GridSheet[]): FlatRow[] => sheets.flatMap(({ runId, rows }) => rows.filter(row => row.fields.length > 0).map(row => ({ ...row, runId })))
const cell = (row: FlatRow | undefined, index: number): CellAddress | null => {
  const field = row?.fields[Math.max(0, Math.min(index, row.fields.length - 1))]
  return row && field !== undefined ? { runId: row.runId, rowId: row.rowId, field } : null
}
const typedIn = (row: FlatRow) => row.fields.filter(field => !isComputedField(field))

/** All cells that are typed into, in reading order. */
function order(rows: FlatRow[]): CellAddress[] {
  return rows.flatMap(row => typedIn(row).map(field => ({ runId: row.runId, rowId: row.rowId, field })))
}

function step(rows: FlatRow[], at: CellAddress, by: 1 | -1): CellAddress | null {
  const row = rows.findIndex(each => each.rowId === at.rowId)
  const cells = order(rows)
  const exact = cells.findIndex(each => each.rowId === at.rowId && each.field === at.field)
  if (exact >= 0) return cells[exact + by] ?? null
  const from = by === 1 ? rows.slice(row + 1) : rows.slice(0, row + 1)
  return (by === 1 ? order(from)[0] : order(from).at(-1)) ?? null
}

/**
 * Where a key leads. `next` and `previous` (Tab) walk through the cells that are typed into, in anatomical order over all
 * runs; up and down keep the column and go on into the neighbouring run. Null when the grid ends there.
 *
 * @example moveInGrid(sheets, { runId: 'r1', rowId: 'wrist', field: 'latencyMs' }, 'down')
 */
export function moveInGrid(sheets: GridSheet[], at: CellAddress, move: GridMove): CellAddress | null {
  const rows = flatten(sheets)
  const index = rows.findIndex(row => row.rowId === at.rowId)
  const row = rows[index]
  if (!row) return order(rows)[0] ?? null
  const column = row.fields.indexOf(at.field)
  switch (move) {
    case 'left': return column > 0 ? cell(row, column - 1) : null
    case 'right': return column < row.fields.length - 1 ? cell(row, column + 1) : null
    case 'up': return cell(rows[index - 1], column)
    case 'down': return cell(rows[index + 1], column)
    case 'next': return step(rows, at, 1)
    case 'previous': return step(rows, at, -1)
    case 'home': return cell(row, 0)
    case 'end': return cell(row, typedIn(row).length - 1)
    case 'first': return order(rows)[0] ?? null
    case 'last': return order(rows).at(-1) ?? null
  }
}

/** The key of a cell, as revisions and elements are named. @example cellKey({ rowId: 'r1', field: 'latencyMs' }) // => 'r1/latencyMs' */
export const cellKey = ({ rowId, field }: { rowId: string, field: string }) => `${rowId}/${field}`
