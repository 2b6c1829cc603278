import type { Generated, Insertable, Selectable } from 'kysely'

export interface SiteRoomTable {
  id: string
  siteId: string
  /** What bookings hold; it does not change once something is booked there. */
  name: string
  note: Generated<string>
  position: number
  closedAt: string | null
}
export type SiteRoom = Selectable<SiteRoomTable>
export type NewSiteRoom = Insertable<SiteRoomTable>
