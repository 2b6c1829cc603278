import * as z from 'zod'
import { mergePhysicians } from '#server/services/merge-physicians'
import { idSchema } from '#shared/schemas/common'
import { mergeSchema } from '#shared/schemas/directory'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'directory.write',
  params: z.object({ id: idSchema }),
  body: mergeSchema,
  handle: async ({ context, params, body }) => {
    await mergePhysicians(context, { id: params.id, into: body.into })
    return { done: true }
  },
})
