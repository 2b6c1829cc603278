import { longRead } from '#server/services/long-read'
import { now } from '#server/services/context'
import { overviewQuerySchema } from '#shared/schemas/overview'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'overview.read',
  query: overviewQuerySchema,
  handle: ({ context, query, sites }) => longRead(context, 'overview', { siteIds: sites, now: now(context), until: query.until }),
})
