import * as z from 'zod'
import { changePerson } from '#server/services/change-person'
import { viewPerson } from '#server/services/people'
import { idSchema } from '#shared/schemas/common'
import { personChangesSchema } from '#shared/schemas/user'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'people.write',
  params: z.object({ id: idSchema }),
  body: personChangesSchema,
  handle: async ({ context, sites, params, body }) => {
    await viewPerson(context, sites, params.id)
    await changePerson(context, params.id, body)
    return await viewPerson(context, sites, params.id)
  },
})
