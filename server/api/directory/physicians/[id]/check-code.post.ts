import * as z from 'zod'
import { checkAddressCode } from '#server/services/verify-address'
import { idSchema } from '#shared/schemas/common'
import { addressCodeSchema } from '#shared/schemas/directory'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'directory.write',
  params: z.object({ id: idSchema }),
  body: addressCodeSchema,
  handle: async ({ context, params, body }) => {
    await checkAddressCode(context, params.id, body.code)
    return { done: true }
  },
})
