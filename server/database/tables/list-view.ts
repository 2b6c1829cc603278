import type { Insertable, Selectable } from 'kysely'

/** A list as somebody wants to find it again: the query part of its address. Never search words, which may be a patient's name. */
export interface ListViewTable {
  id: string
  userId: string
  room: string
  name: string
  query: string
  createdAt: string
}
export type ListView = Selectable<ListViewTable>
export type NewListView = Insertable<ListViewTable>
