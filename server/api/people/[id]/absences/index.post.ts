import * as z from 'zod'
import { addAbsence } from '#server/services/keep-absence'
import { viewPerson } from '#server/services/people'
import { absenceSchema } from '#shared/schemas/absence'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'people.write',
  params: z.object({ id: idSchema }),
  body: absenceSchema,
  handle: async ({ context, sites, params, body }) => {
    await viewPerson(context, sites, params.id)
    return { id: await addAbsence(context, params.id, body) }
  },
})
