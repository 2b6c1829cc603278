import type { Insertable, Selectable } from 'kysely'

export interface ReferralCopyTable {
  referralId: string
  physicianId: string
}
export type ReferralCopy = Selectable<ReferralCopyTable>
export type NewReferralCopy = Insertable<ReferralCopyTable>
