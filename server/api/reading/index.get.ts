import * as z from 'zod'
import { readingPage } from '#server/database/queries/reading'
import { pageQuerySchema } from '#shared/schemas/common'
import { studyStates } from '#shared/states'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'report.write',
  query: pageQuerySchema.extend({ state: z.enum(studyStates).optional(), siteId: z.string().optional(), assigned: z.enum(['mine', 'unassigned']).optional() }),
  handle: ({ context, user, query, sites }) => readingPage(context.db, {
    siteIds: query.siteId ? sites.filter(site => site === query.siteId) : sites,
    states: query.state ? [query.state] : ['handed-over', 'returned'],
    ...(query.assigned ? { readerId: query.assigned === 'mine' ? user.id : null } : {}),
  }, query),
})
