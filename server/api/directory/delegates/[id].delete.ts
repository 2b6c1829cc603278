import * as z from 'zod'
import { endDelegate } from '#server/services/practice-delegates'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'directory.write',
  params: z.object({ id: idSchema }),
  handle: async ({ context, params }) => {
    await endDelegate(context, params.id)
    return { done: true }
  },
})
