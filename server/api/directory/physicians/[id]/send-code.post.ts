import * as z from 'zod'
import { sendAddressCode } from '#server/services/verify-address'
import { idSchema } from '#shared/schemas/common'
import { sendCodeSchema } from '#shared/schemas/directory'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'directory.write',
  params: z.object({ id: idSchema }),
  body: sendCodeSchema,
  handle: async ({ context, params, body }) => {
    await sendAddressCode(context, { physicianId: params.id, siteId: body.siteId })
    return { done: true }
  },
})
