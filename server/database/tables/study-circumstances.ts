import type { Generated, Selectable } from 'kysely'
import type { Supervision, Tolerance } from '#shared/schemas/bench-day'

/** No row: nothing was said yet. */
export interface StudyCircumstancesTable {
  studyId: string
  room: Generated<string>
  supervision: Supervision | null
  supervisorId: string | null
  tolerance: Tolerance | null
  toleranceNote: Generated<string>
  /** What the patient was told. */
  told: Generated<string>
  revision: Generated<number>
}
export type StudyCircumstances = Selectable<StudyCircumstancesTable>

export interface StudyEquipmentTable {
  studyId: string
  equipmentId: string
}
