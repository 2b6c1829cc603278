import type { Generated, Insertable, Selectable } from 'kysely'

export interface StudyTemperatureTable {
  id: string
  studyId: string
  segment: 'hand' | 'foot'
  side: 'right' | 'left'
  celsius: number
  at: string
  method: Generated<string>
  warmed: Generated<number>
  removedAt: string | null
  savedBy: string
}
export type StudyTemperature = Selectable<StudyTemperatureTable>
export type NewStudyTemperature = Insertable<StudyTemperatureTable>
