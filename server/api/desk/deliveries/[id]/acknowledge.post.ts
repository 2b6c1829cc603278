import * as z from 'zod'
import { acknowledgeOwn } from '#server/services/view-desk'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'desk.read',
  params: z.object({ id: idSchema }),
  handle: async ({ context, params }) => {
    await acknowledgeOwn(context, params.id)
    return { done: true }
  },
})
