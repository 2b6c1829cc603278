import type { Generated, Insertable, Selectable } from 'kysely'

export interface StudyTable {
  id: string
  number: string
  referralId: string
  patientId: string
  siteId: string
  state: 'planned' | 'recording' | 'handed-over' | 'returned' | 'read' | 'stopped' | 'entered-in-error'
  stateSince: string
  stateReason: Generated<string>
  studyDate: string
  startedAt: string | null
  handedOverAt: string | null
  technologistId: string | null
  readerId: string | null
  takenAt: string | null
  protocol: string | null
  heightCm: number | null
  weightKg: number | null
  confirmationJson: string | null
  handOverNote: Generated<string>
  returnQuestion: Generated<string>
  returnRunId: string | null
  excludedEntrapment: Generated<number>
  policyJson: string | null
  summaryJson: string | null
  createdAt: string
  revision: Generated<number>
}
export type Study = Selectable<StudyTable>
export type NewStudy = Insertable<StudyTable>
