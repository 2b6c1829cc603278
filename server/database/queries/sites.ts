import type { Database } from '#server/database/connection'
import type { Site } from '#server/database/tables/site'
import type { SiteView } from '#shared/schemas/user'

export function siteView(site: Site): SiteView {
  return {
    id: site.id, name: site.name, town: site.town, address: site.address, phone: site.phone, timeZone: site.timeZone,
    handMinimumC: site.handMinimumC, footMinimumC: site.footMinimumC, distanceUncertaintyMm: site.distanceUncertaintyMm, latencyUncertaintyMs: site.latencyUncertaintyMs,
    rooms: JSON.parse(site.roomsJson) as string[],
  }
}

/** The open sites among these, by name. */
export async function listSites(db: Database, ids: readonly string[]): Promise<SiteView[]> {
  const rows = await db.selectFrom('site').selectAll().where('id', 'in', ids).where('closedAt', 'is', null).orderBy('name').execute()
  return rows.map(siteView)
}
