import type { Selectable } from 'kysely'

/** How many referrals there are by site, state and urgency. Kept by triggers; nobody writes it by hand. */
export interface ReferralCountTable {
  siteId: string
  state: string
  urgency: string
  n: number
}
export type ReferralCount = Selectable<ReferralCountTable>
