import * as z from 'zod'
import { endOwnSession } from '#server/services/sessions'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'signed-in',
  duringEnrolment: true,
  params: z.object({ id: idSchema }),
  handle: async ({ context, user, params }) => {
    await endOwnSession(context, user.id, params.id)
    return { done: true }
  },
})
