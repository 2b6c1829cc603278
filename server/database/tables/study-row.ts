import type { Insertable, Selectable } from 'kysely'

export interface StudyRowTable {
  id: string
  runId: string
  site: string
  position: number
  removedAt: string | null
}
export type StudyRow = Selectable<StudyRowTable>
export type NewStudyRow = Insertable<StudyRowTable>
