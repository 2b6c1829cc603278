import { benchDay } from '#server/database/queries/bench'
import { DomainError } from '#shared/errors'
import type { BenchRow } from '#shared/schemas/bench'
import type { ServiceContext } from './context'
import { dayBounds, localDate } from './site-time'

/** The bench's list for a calendar day at the site; today there when no day is asked for. */
export async function viewBenchDay({ db, clock }: ServiceContext, { siteId, date }: { siteId: string, date?: string }): Promise<BenchRow[]> {
  const site = await db.selectFrom('site').select('timeZone').where('id', '=', siteId).executeTakeFirst()
  if (!site) throw new DomainError('not-found')
  return benchDay(db, { siteId, ...dayBounds(date ?? localDate(clock(), site.timeZone), site.timeZone) })
}
