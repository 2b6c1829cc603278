import * as z from 'zod'
import { viewPerson } from '#server/services/people'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'people.read',
  params: z.object({ id: idSchema }),
  handle: ({ context, sites, params }) => viewPerson(context, sites, params.id),
})
