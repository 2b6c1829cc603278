import type { Database } from '#server/database/connection'
import type { Site } from '#server/database/tables/site'
import type { SiteBasics } from '#shared/schemas/user'

/** `rooms` are the names of those that are open (`roomNames`). */
export function siteBasics(site: Site, rooms: string[]): SiteBasics {
  return { id: site.id, name: site.name, town: site.town, address: site.address, phone: site.phone, timeZone: site.timeZone, rooms }
}

/** The open sites among these, by name. */
export async function openSites(db: Database, ids: readonly string[]): Promise<Site[]> {
  return await db.selectFrom('site').selectAll().where('id', 'in', ids).where('closedAt', 'is', null).orderBy('name').execute()
}
