import type { Insertable, Selectable } from 'kysely'

/** When a site works, by weekday (1 Monday to 7 Sunday) and its wall clock ("08:00"); several spans a day where there is a break. */
export interface SiteHoursTable {
  siteId: string
  weekday: number
  opensAt: string
  closesAt: string
}
export type SiteHours = Selectable<SiteHoursTable>
export type NewSiteHours = Insertable<SiteHoursTable>
