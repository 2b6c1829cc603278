import * as z from 'zod'
import { removeClosedDay } from '#server/services/site-calendar'
import { idSchema, isoDateSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'site.write',
  params: z.object({ id: idSchema, day: isoDateSchema }),
  siteOf: async (_db, { params }) => params.id,
  handle: ({ context, params }) => removeClosedDay(context, params.id, params.day),
})
