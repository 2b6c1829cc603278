import * as z from 'zod'
import { changePractice } from '#server/services/change-practice'
import { viewPractice } from '#server/services/view-directory'
import { idSchema } from '#shared/schemas/common'
import { practiceChangesSchema } from '#shared/schemas/directory'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'directory.write',
  params: z.object({ id: idSchema }),
  body: practiceChangesSchema,
  handle: async ({ context, params, body }) => {
    await changePractice(context, params.id, body)
    return await viewPractice(context, params.id)
  },
})
