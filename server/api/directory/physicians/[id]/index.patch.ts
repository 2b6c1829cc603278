import * as z from 'zod'
import { changePhysician } from '#server/services/change-physician'
import { idSchema } from '#shared/schemas/common'
import { physicianChangesSchema } from '#shared/schemas/directory'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'directory.write',
  params: z.object({ id: idSchema }),
  body: physicianChangesSchema,
  handle: async ({ context, params, body }) => {
    await changePhysician(context, params.id, body)
    return { done: true }
  },
})
