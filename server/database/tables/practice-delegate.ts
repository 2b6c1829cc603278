import type { Generated, Insertable, Selectable } from 'kysely'

/** Somebody of a practice who may be told its passphrase and collect its reports, besides the physicians. */
export interface PracticeDelegateTable {
  id: string
  practiceId: string
  name: string
  duty: Generated<string>
  /** The number that is called back before anything is told. */
  phone: Generated<string>
  createdAt: string
  createdBy: string
  endedAt: string | null
  endedBy: string | null
}
export type PracticeDelegate = Selectable<PracticeDelegateTable>
export type NewPracticeDelegate = Insertable<PracticeDelegateTable>
