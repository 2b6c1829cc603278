import { addPerson } from '#server/services/change-person'
import { viewPerson } from '#server/services/people'
import { personSchema } from '#shared/schemas/user'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'people.write',
  body: personSchema,
  handle: async ({ context, sites, body }) => viewPerson(context, sites, await addPerson(context, body)),
})
