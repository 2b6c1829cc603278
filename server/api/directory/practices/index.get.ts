import { listPractices } from '#server/services/view-directory'
import { practiceQuerySchema } from '#shared/schemas/directory'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'directory.read',
  query: practiceQuerySchema,
  handle: ({ context, query }) => listPractices(context, query),
})
