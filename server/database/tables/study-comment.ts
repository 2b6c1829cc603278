import type { Selectable } from 'kysely'

export interface StudyCommentTable {
  id: string
  studyId: string
  runId: string | null
  text: string
  at: string
  byUserId: string
}
export type StudyComment = Selectable<StudyCommentTable>
