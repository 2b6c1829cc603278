import * as z from 'zod'
import { reopenPractice } from '#server/services/close-practice'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'directory.write',
  params: z.object({ id: idSchema }),
  handle: async ({ context, params }) => {
    await reopenPractice(context, params.id)
    return { done: true }
  },
})
