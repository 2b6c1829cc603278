import type { Insertable, Selectable } from 'kysely'

export interface OwnSetTable {
  setId: string
  version: number
  tableJson: string
  sha256: string
  importedBy: string
  importedAt: string
}
export type OwnSet = Selectable<OwnSetTable>
export type NewOwnSet = Insertable<OwnSetTable>
