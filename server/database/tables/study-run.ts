import type { Generated, Insertable, Selectable } from 'kysely'

export interface StudyRunTable {
  id: string
  studyId: string
  technique: string
  side: 'right' | 'left'
  position: number
  planned: Generated<number>
  settingsJson: Generated<string>
  removedAt: string | null
  createdAt: string
  createdBy: string | null
  revision: Generated<number>
}
export type StudyRun = Selectable<StudyRunTable>
export type NewStudyRun = Insertable<StudyRunTable>
