import * as z from 'zod'
import { viewBenchDay } from '#server/services/view-bench-day'
import { idSchema, isoDateSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

/** The day at one site; without a date, today there. */
export default defineApiHandler({
  allow: 'study.record',
  query: z.object({ siteId: idSchema, date: isoDateSchema.optional() }),
  siteOf: async (_db, { query }) => query.siteId,
  handle: ({ context, query }) => viewBenchDay(context, query),
})
