import { measuresOf } from '#server/database/queries/policy'
import { roomNames } from '#server/database/queries/site-calendar'
import { openSites, siteBasics } from '#server/database/queries/sites'
import type { SiteView } from '#shared/schemas/user'
import type { ServiceContext } from './context'
import { localDate } from './site-time'

/** The open sites among these, by name, with the temperatures and uncertainties that count there today. */
export async function listSites(context: ServiceContext, ids: readonly string[]): Promise<SiteView[]> {
  const views: SiteView[] = []
  const rooms = await roomNames(context.db, ids)
  for (const site of await openSites(context.db, ids)) {
    const { temperatureCorrection: _, ...measures } = await measuresOf(context.db, site.id, localDate(context.clock(), site.timeZone))
    views.push({ ...siteBasics(site, rooms.get(site.id) ?? []), ...measures })
  }
  return views
}
