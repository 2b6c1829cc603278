import { viewDesk } from '#server/services/view-desk'
import { deskQuerySchema } from '#shared/schemas/desk'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'desk.read',
  query: deskQuerySchema,
  handle: ({ context, query }) => viewDesk(context, query),
})
