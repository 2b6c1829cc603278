import * as z from 'zod'
import { closePractice } from '#server/services/close-practice'
import { idSchema } from '#shared/schemas/common'
import { closeSchema } from '#shared/schemas/directory'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'directory.write',
  params: z.object({ id: idSchema }),
  body: closeSchema,
  handle: async ({ context, params, body }) => {
    await closePractice(context, params.id, body.reason)
    return { done: true }
  },
})
