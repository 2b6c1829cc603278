import * as z from 'zod'
import { deactivatePerson } from '#server/services/change-person'
import { viewPerson } from '#server/services/people'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'people.write',
  params: z.object({ id: idSchema }),
  handle: async ({ context, sites, params }) => {
    await viewPerson(context, sites, params.id)
    await deactivatePerson(context, params.id)
    return await viewPerson(context, sites, params.id)
  },
})
