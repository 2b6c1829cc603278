import type { Generated, Insertable, Selectable } from 'kysely'

export interface SiteTable {
  id: string
  organisationId: string
  name: string
  town: string
  address: Generated<string>
  phone: Generated<string>
  timeZone: string
  handMinimumC: Generated<number>
  footMinimumC: Generated<number>
  distanceUncertaintyMm: Generated<number>
  latencyUncertaintyMs: Generated<number>
  closedAt: string | null
  createdAt: string
}
export type Site = Selectable<SiteTable>
export type NewSite = Insertable<SiteTable>
