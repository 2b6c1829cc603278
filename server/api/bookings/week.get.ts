import * as z from 'zod'
import { viewWeek } from '#server/services/view-week'
import { idSchema, isoDateSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

/** A week of a site, from the Monday of the day that is asked for. */
export default defineApiHandler({
  allow: 'referral.book',
  query: z.object({ siteId: idSchema, day: isoDateSchema.optional() }),
  siteOf: async (_db, { query }) => query.siteId,
  handle: ({ context, query }) => viewWeek(context, query),
})
