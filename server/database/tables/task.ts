import type { Generated, Insertable, Selectable } from 'kysely'

export interface TaskTable {
  id: string
  kind: string
  subject: string
  subjectId: string
  siteId: string | null
  ownerId: string | null
  ownerRole: string | null
  sentence: string
  createdAt: string
  dueAt: string | null
  doneAt: string | null
  doneBy: string | null
  resolution: Generated<string>
}
export type Task = Selectable<TaskTable>
export type NewTask = Insertable<TaskTable>
