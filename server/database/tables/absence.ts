import type { Generated, Insertable, Selectable } from 'kysely'

/** A person is away from the first to the last day, both included; who covers finds their studies in the queue. */
export interface AbsenceTable {
  id: string
  userId: string
  fromDay: string
  toDay: string
  coveredBy: string
  createdAt: string
  createdBy: string
  cancelledAt: Generated<string | null>
}
export type Absence = Selectable<AbsenceTable>
export type NewAbsence = Insertable<AbsenceTable>
