import * as z from 'zod'
import { changeHours } from '#server/services/site-calendar'
import { idSchema } from '#shared/schemas/common'
import { siteHoursSchema } from '#shared/schemas/site-calendar'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'site.write',
  params: z.object({ id: idSchema }),
  body: siteHoursSchema,
  siteOf: async (_db, { params }) => params.id,
  handle: ({ context, params, body }) => changeHours(context, params.id, body.hours),
})
