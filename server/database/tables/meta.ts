import type { Insertable, Selectable } from 'kysely'

export interface MetaTable {
  key: string
  value: string
}
export type Meta = Selectable<MetaTable>
export type NewMeta = Insertable<MetaTable>
