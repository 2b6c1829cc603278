import type { Insertable, Selectable } from 'kysely'
import type { Role } from '#shared/permissions'

/** A role that waits for a second person; it gives no right before. */
export interface RoleProposalTable {
  id: string
  userId: string
  siteId: string
  role: Role
  startsOn: string
  endsOn: string | null
  proposedBy: string
  proposedAt: string
  decidedBy: string | null
  decidedAt: string | null
  outcome: 'approved' | 'approved-alone' | 'declined' | null
}
export type RoleProposal = Selectable<RoleProposalTable>
export type NewRoleProposal = Insertable<RoleProposalTable>
