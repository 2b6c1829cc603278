import { listPeople } from '#server/services/people'
import { pageQuerySchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'people.read',
  query: pageQuerySchema,
  handle: ({ context, sites, query }) => listPeople(context, sites, query),
})
