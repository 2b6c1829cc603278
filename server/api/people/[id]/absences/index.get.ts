import * as z from 'zod'
import { viewPerson } from '#server/services/people'
import { viewAbsences } from '#server/services/view-absences'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'people.read',
  params: z.object({ id: idSchema }),
  handle: async ({ context, sites, params }) => {
    await viewPerson(context, sites, params.id)
    return await viewAbsences(context, params.id)
  },
})
