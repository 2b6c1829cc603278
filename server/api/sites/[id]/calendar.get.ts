import * as z from 'zod'
import { siteCalendar } from '#server/database/queries/site-calendar'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'site.read',
  params: z.object({ id: idSchema }),
  siteOf: async (_db, { params }) => params.id,
  handle: ({ context, params }) => siteCalendar(context.db, params.id),
})
