import * as z from 'zod'
import { changeSite } from '#server/services/change-site'
import { idSchema } from '#shared/schemas/common'
import { siteChangesSchema } from '#shared/schemas/user'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'site.write',
  params: z.object({ id: idSchema }),
  body: siteChangesSchema,
  siteOf: async (_db, { params }) => params.id,
  handle: ({ context, params, body }) => changeSite(context, params.id, body),
})
