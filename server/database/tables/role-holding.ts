import type { Insertable, Selectable } from 'kysely'

export interface RoleHoldingTable {
  id: string
  userId: string
  siteId: string
  role: 'technologist' | 'neurologist' | 'administrator' | 'medical-director' | 'referring-physician'
  startsOn: string
  endsOn: string | null
  grantedBy: string | null
  createdAt: string
}
export type RoleHolding = Selectable<RoleHoldingTable>
export type NewRoleHolding = Insertable<RoleHoldingTable>
