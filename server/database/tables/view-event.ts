import type { Generated, Insertable, Selectable } from 'kysely'

export interface ViewEventTable {
  seq: Generated<number>
  at: string
  actorId: string
  siteId: string | null
  subject: string
  subjectId: string
  patientId: string | null
  because: Generated<string>
  previousMac: string
  mac: string
}
export type ViewEvent = Selectable<ViewEventTable>
export type NewViewEvent = Insertable<ViewEventTable>
