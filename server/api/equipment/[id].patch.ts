import * as z from 'zod'
import { siteOfEquipment } from '#server/database/queries/equipment'
import { changeEquipment } from '#server/services/equipment'
import { idSchema } from '#shared/schemas/common'
import { changeEquipmentSchema } from '#shared/schemas/bench-day'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'site.write',
  params: z.object({ id: idSchema }),
  body: changeEquipmentSchema,
  siteOf: (db, { params }) => siteOfEquipment(db, params.id),
  handle: ({ context, params, body }) => changeEquipment(context, { id: params.id, ...body }),
})
