import type * as z from 'zod'
import { awayOn, coveredOn } from '#server/database/queries/absences'
import { policyInForce } from '#server/database/queries/policies'
import { readingPage, waitingCounts } from '#server/database/queries/reading'
import type { readingQuerySchema, ReadingPage } from '#shared/schemas/reading'
import type { ServiceContext } from './context'
import { organisationDay } from './organisation-day'

/**
 * The queue of these sites. "Mine" is what the asker has taken or was given, and what belongs to somebody who is away
 * today and covered by the asker. Each line says whether its reader is away and who covers.
 */
export async function viewReadingQueue(context: ServiceContext, sites: string[], query: z.output<typeof readingQuerySchema>): Promise<ReadingPage> {
  const { db, actor } = context
  const today = await organisationDay(context)
  const siteIds = query.siteId ? sites.filter(site => site === query.siteId) : sites
  const mine = query.assigned === 'mine' ? [actor.userId!, ...await coveredOn(db, actor.userId!, today)] : undefined
  const page = await readingPage(db, {
    siteIds, states: query.state ? [query.state] : ['handed-over', 'returned'],
    ...(query.reader ? { readerIds: [query.reader] } : mine ? { readerIds: mine } : query.assigned ? { readerIds: null } : {}),
    ...(query.urgency ? { urgency: query.urgency } : {}),
    ...(query.older ? { since: new Date(context.clock().getTime() - query.older * 3_600_000).toISOString() } : {}),
  }, query)
  const away = await awayOn(db, [...new Set(page.rows.flatMap(row => row.readerId ?? []))], today)
  const { body: clocks } = await policyInForce(db, 'clocks', null, today)
  return { ...page, signWithinHours: clocks.sign, rows: page.rows.map(row => ({ ...row, away: (row.readerId && away.get(row.readerId)) || null })), waiting: await waitingCounts(db, siteIds, context.clock()) }
}
