import * as z from 'zod'
import { decideRole } from '#server/services/role-proposals'
import { idSchema } from '#shared/schemas/common'
import { decisionSchema } from '#shared/schemas/user'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'people.read',
  params: z.object({ id: idSchema }),
  body: decisionSchema,
  handle: async ({ context, params, body }) => {
    await decideRole(context, { id: params.id, approve: body.approve })
    return { done: true }
  },
})
