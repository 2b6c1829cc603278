import type { Selectable } from 'kysely'

/** A visit after the first, which stands in the study itself. */
export interface StudyVisitTable {
  id: string
  studyId: string
  /** Calendar day at the site. */
  day: string
  startedAt: string
  reason: string
  technologistId: string | null
  confirmationJson: string
}
export type StudyVisit = Selectable<StudyVisitTable>
