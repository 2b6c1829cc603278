import type { Insertable, Selectable } from 'kysely'

/** One study opened for a stated reason by a neurologist without a role at its site; it ends by itself. */
export interface EmergencyAccessTable {
  id: string
  userId: string
  studyId: string
  siteId: string
  reason: string
  openedAt: string
  expiresAt: string
}
export type EmergencyAccess = Selectable<EmergencyAccessTable>
export type NewEmergencyAccess = Insertable<EmergencyAccessTable>
