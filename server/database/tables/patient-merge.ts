import type { Generated, Insertable, Selectable } from 'kysely'

export interface PatientMergeTable {
  id: string
  keptId: string
  mergedId: string
  /** Ids of what was moved: `{ referrals, studies, outsideStudies }`. */
  movedJson: string
  reason: string
  mergedAt: string
  mergedBy: string
  undoneAt: string | null
  undoneBy: string | null
  undoReason: Generated<string>
}
export type PatientMerge = Selectable<PatientMergeTable>
export type NewPatientMerge = Insertable<PatientMergeTable>
