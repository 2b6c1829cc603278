import * as z from 'zod'
import { siteOfAdoption } from '#server/database/queries/adoptions'
import { approveAdoption } from '#server/services/adopt-set'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'shelf.approve',
  params: z.object({ id: idSchema }),
  siteOf: (db, { params }) => siteOfAdoption(db, params.id),
  handle: async ({ context, params }) => {
    await approveAdoption(context, { id: params.id })
    return { id: params.id }
  },
})
