import * as z from 'zod'
import { liftLegalHold } from '#server/services/retention'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'retention.manage',
  params: z.object({ id: idSchema }),
  handle: async ({ context, params }) => {
    await liftLegalHold(context, params.id)
    return { done: true }
  },
})
