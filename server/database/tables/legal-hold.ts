import type { Insertable, Selectable } from 'kysely'

/** A record that must be kept however old it is. */
export interface LegalHoldTable {
  id: string
  patientId: string
  reason: string
  setBy: string
  setAt: string
  liftedBy: string | null
  liftedAt: string | null
}
export type LegalHold = Selectable<LegalHoldTable>
export type NewLegalHold = Insertable<LegalHoldTable>
