import type { Generated, Insertable, Selectable } from 'kysely'

export interface SiteClosedDayTable {
  siteId: string
  day: string
  reason: Generated<string>
}
export type SiteClosedDay = Selectable<SiteClosedDayTable>
export type NewSiteClosedDay = Insertable<SiteClosedDayTable>
