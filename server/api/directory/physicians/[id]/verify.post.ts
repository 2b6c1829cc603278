import * as z from 'zod'
import { verifyOtherwise } from '#server/services/verify-address'
import { idSchema } from '#shared/schemas/common'
import { addressCheckSchema } from '#shared/schemas/directory'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'directory.write',
  params: z.object({ id: idSchema }),
  body: addressCheckSchema,
  handle: async ({ context, params, body }) => {
    await verifyOtherwise(context, params.id, body.reason)
    return { done: true }
  },
})
