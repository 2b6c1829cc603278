import type { Generated, Insertable, Selectable } from 'kysely'
import type { QuestionState } from '#shared/schemas/question'

/** What the bench asked the readers while the patient was there, and what was answered. */
export interface StudyQuestionTable {
  id: string
  studyId: string
  siteId: string
  runId: string | null
  question: string
  askedBy: string
  askedAt: string
  state: QuestionState
  seenBy: string | null
  seenAt: string | null
  answer: Generated<string>
  addedRunId: string | null
  closedBy: string | null
  closedAt: string | null
  /** When it became a task because nobody had answered. */
  overdueAt: string | null
}
export type StudyQuestion = Selectable<StudyQuestionTable>
export type NewStudyQuestion = Insertable<StudyQuestionTable>
