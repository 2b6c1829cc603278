import * as z from 'zod'
import { equipmentAt } from '#server/database/queries/equipment'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'site.read',
  params: z.object({ id: idSchema }),
  siteOf: async (_db, { params }) => params.id,
  handle: ({ context, params }) => equipmentAt(context.db, params.id),
})
