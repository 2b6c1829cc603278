import * as z from 'zod'
import { addClosedDay } from '#server/services/site-calendar'
import { idSchema } from '#shared/schemas/common'
import { closedDaySchema } from '#shared/schemas/site-calendar'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'site.write',
  params: z.object({ id: idSchema }),
  body: closedDaySchema,
  siteOf: async (_db, { params }) => params.id,
  handle: ({ context, params, body }) => addClosedDay(context, params.id, body),
})
