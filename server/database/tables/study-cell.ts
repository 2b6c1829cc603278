import type { Insertable, Selectable } from 'kysely'

export interface StudyCellTable {
  rowId: string
  field: string
  studyId: string
  entryJson: string
  revision: number
  savedAt: string
  savedBy: string
}
export type StudyCell = Selectable<StudyCellTable>
export type NewStudyCell = Insertable<StudyCellTable>
