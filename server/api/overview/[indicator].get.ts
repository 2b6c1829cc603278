import * as z from 'zod'
import { longRead } from '#server/services/long-read'
import { now } from '#server/services/context'
import { casesQuerySchema, indicatorSchema } from '#shared/schemas/overview'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'overview.read',
  params: z.object({ indicator: indicatorSchema }),
  query: casesQuerySchema,
  siteOf: async (_db, { query }) => query.siteId,
  handle: ({ context, params, query }) => longRead(context, 'overviewCases', { ...params, ...query, now: now(context) }),
})
