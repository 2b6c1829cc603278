import type { ReferenceTable } from '../schemas/reference-table'
import type { AppliedLimit } from './types'

type Row = ReferenceTable['rows'][number]
/** Tables never change once loaded, so each is sorted once. */
const rowIndices = new WeakMap<ReferenceTable, Map<string, Row>>()

function rowsById(table: ReferenceTable): Map<string, Row> {
  let index = rowIndices.get(table)
  if (!index) {
    index = new Map(table.rows.map(row => [row.id, row]))
    rowIndices.set(table, index)
  }
  return index
}

/** Finds the row that an applied limit came from. */
export function rowFinder(tables: readonly ReferenceTable[]): (limit: AppliedLimit) => Row | undefined {
  return (limit) => {
    const table = tables.find(one => one.id === limit.setId && one.version === limit.setVersion)
    return table && rowsById(table).get(limit.rowId)
  }
}
