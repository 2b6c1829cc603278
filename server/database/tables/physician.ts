import type { Generated, Insertable, Selectable } from 'kysely'

export interface PhysicianTable {
  id: string
  practiceId: string
  name: string
  title: Generated<string>
  email: string
  emailVerifiedAt: string | null
  /** By the code that was mailed, or by another check, which the note describes. */
  emailVerifiedBy: 'code' | 'other' | null
  emailVerifiedNote: Generated<string>
  phone: Generated<string>
  leftOn: string | null
  userId: string | null
  /** The entry that stands for this one: two were one person. */
  mergedInto: Generated<string | null>
  createdAt: string
}
export type Physician = Selectable<PhysicianTable>
export type NewPhysician = Insertable<PhysicianTable>
