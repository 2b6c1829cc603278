import * as z from 'zod'
import { endDeskAccess } from '#server/services/desk-access'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'directory.write',
  params: z.object({ id: idSchema }),
  handle: async ({ context, params }) => {
    await endDeskAccess(context, params.id)
    return { done: true }
  },
})
