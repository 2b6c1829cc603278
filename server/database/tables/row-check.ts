import type { Insertable, Selectable } from 'kysely'

export interface RowCheckTable {
  setId: string
  setVersion: number
  rowId: string
  checkedBy: string
  checkedAt: string
}
export type RowCheck = Selectable<RowCheckTable>
export type NewRowCheck = Insertable<RowCheckTable>
