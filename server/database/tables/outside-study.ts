import type { Insertable, Selectable } from 'kysely'

export interface OutsideStudyTable {
  id: string
  patientId: string
  performedOn: string
  place: string
  summary: string
  /** `OutsideValue[]` */
  valuesJson: string
  uploadId: string | null
  enteredAt: string
  enteredBy: string
  removedAt: string | null
}
export type OutsideStudy = Selectable<OutsideStudyTable>
export type NewOutsideStudy = Insertable<OutsideStudyTable>
