import * as z from 'zod'
import { addEquipment } from '#server/services/equipment'
import { idSchema } from '#shared/schemas/common'
import { equipmentSchema } from '#shared/schemas/bench-day'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'site.write',
  params: z.object({ id: idSchema }),
  body: equipmentSchema,
  siteOf: async (_db, { params }) => params.id,
  handle: ({ context, params, body }) => addEquipment(context, { siteId: params.id, ...body }),
})
