import { viewReadingQueue } from '#server/services/view-reading-queue'
import { readingQuerySchema } from '#shared/schemas/reading'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'report.write',
  query: readingQuerySchema,
  handle: ({ context, query, sites }) => viewReadingQueue(context, sites, query),
})
