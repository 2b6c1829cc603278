import type { Insertable, Selectable } from 'kysely'

/** A referral that came from the desk, and the record that was made for its patient without a look at the register. */
export interface DeskReferralTable {
  referralId: string
  patientId: string
  sentBy: string
  sentAt: string
  /** When somebody of the clinic said who the patient is; until then the referral is not accepted. */
  identifiedAt: string | null
  identifiedBy: string | null
  outcome: 'new' | 'known' | null
  /** The merge that settled it: undone, the question stands again. */
  mergeId: string | null
}
export type DeskReferral = Selectable<DeskReferralTable>
export type NewDeskReferral = Insertable<DeskReferralTable>
