import type { Generated, Insertable, Selectable } from 'kysely'

export interface PolicyVersionTable {
  id: string
  name: string
  siteId: string | null
  version: number
  bodyJson: string
  note: Generated<string>
  proposedBy: string
  proposedAt: string
  approvedBy: string | null
  approvedAt: string | null
  effectiveOn: string
  withdrawnAt: string | null
  withdrawnBy: string | null
}
export type PolicyVersion = Selectable<PolicyVersionTable>
export type NewPolicyVersion = Insertable<PolicyVersionTable>
