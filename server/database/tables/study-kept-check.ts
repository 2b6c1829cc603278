import type { Insertable, Selectable } from 'kysely'

export interface StudyKeptCheckTable {
  studyId: string
  key: string
  reason: string
  /** The question as it was worded when it was answered. */
  sentence: string | null
  /** The cells it rested on, by `rowId/field`. */
  cellsJson: string | null
  keptBy: string
  keptAt: string
}
export type StudyKeptCheck = Selectable<StudyKeptCheckTable>
export type NewStudyKeptCheck = Insertable<StudyKeptCheckTable>
