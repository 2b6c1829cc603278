import type { Generated, Insertable, Selectable } from 'kysely'

/** A referral that a referring physician has begun at the desk; nobody else reads it. */
export interface DeskDraftTable {
  id: string
  userId: string
  bodyJson: string
  createdAt: string
  savedAt: string
  revision: Generated<number>
}
export type DeskDraft = Selectable<DeskDraftTable>
export type NewDeskDraft = Insertable<DeskDraftTable>
