import type { Insertable, Selectable } from 'kysely'

export interface StudyKeptCheckTable {
  studyId: string
  key: string
  reason: string
  keptBy: string
  keptAt: string
}
export type StudyKeptCheck = Selectable<StudyKeptCheckTable>
export type NewStudyKeptCheck = Insertable<StudyKeptCheckTable>
