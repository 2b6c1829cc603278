import type { Selectable } from 'kysely'

/** Values that were written on paper first. */
export interface StudyLaterEntryTable {
  studyId: string
  measuredAt: string
  measuredBy: string
  reason: string
  enteredAt: string
  enteredBy: string
}
export type StudyLaterEntry = Selectable<StudyLaterEntryTable>
