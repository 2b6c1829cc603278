import * as z from 'zod'
import { changeRooms } from '#server/services/site-calendar'
import { idSchema } from '#shared/schemas/common'
import { siteRoomsSchema } from '#shared/schemas/site-calendar'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'site.write',
  params: z.object({ id: idSchema }),
  body: siteRoomsSchema,
  siteOf: async (_db, { params }) => params.id,
  handle: ({ context, params, body }) => changeRooms(context, params.id, body.rooms),
})
