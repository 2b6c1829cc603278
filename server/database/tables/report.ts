import type { Generated, Insertable, Selectable } from 'kysely'

export interface ReportTable {
  id: string
  studyId: string
  number: string
  draftJson: Generated<string>
  draftRevision: Generated<number>
  readyFingerprint: string | null
  draftedBy: string | null
  draftedAt: string
  createdAt: string
}
export type Report = Selectable<ReportTable>
export type NewReport = Insertable<ReportTable>
