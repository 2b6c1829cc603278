import type { Generated, Insertable, Selectable } from 'kysely'

export interface PatientTable {
  id: string
  recordNumber: string
  familyName: string
  givenName: string
  birthDate: string
  sexForLimits: 'female' | 'male' | null
  gender: Generated<string>
  identifier: Generated<string>
  phone: Generated<string>
  email: Generated<string>
  /** May appointments be mailed to that address? */
  mailConsent: Generated<'yes' | 'no' | 'not-asked'>
  interpreter: Generated<string>
  mergedInto: string | null
  createdAt: string
  createdBy: string | null
  revision: Generated<number>
}
export type Patient = Selectable<PatientTable>
export type NewPatient = Insertable<PatientTable>
