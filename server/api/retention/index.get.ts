import { listRetention } from '#server/services/retention'
import { retentionQuerySchema } from '#shared/schemas/retention'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'retention.manage',
  query: retentionQuerySchema,
  handle: ({ context, query }) => listRetention(context, query),
})
