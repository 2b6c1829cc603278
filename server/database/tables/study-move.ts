import type { Selectable } from 'kysely'

/** Values that were recorded in the wrong record, and where they went. */
export interface StudyMoveTable {
  fromStudyId: string
  toStudyId: string
  reason: string
  at: string
  byUserId: string
  checkedAt: string | null
  checkedBy: string | null
}
export type StudyMove = Selectable<StudyMoveTable>
