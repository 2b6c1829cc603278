import * as z from 'zod'
import { noteHandedOver } from '#server/services/change-practice'
import { viewPractice } from '#server/services/view-directory'
import { idSchema } from '#shared/schemas/common'
import { passphraseHandOverSchema } from '#shared/schemas/directory'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'directory.write',
  params: z.object({ id: idSchema }),
  body: passphraseHandOverSchema,
  handle: async ({ context, params, body }) => {
    await noteHandedOver(context, params.id, body)
    return await viewPractice(context, params.id)
  },
})
