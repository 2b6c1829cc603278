import * as z from 'zod'
import { cancelAbsence } from '#server/services/keep-absence'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

/** The own absence, or one of a person whom the asker administers everywhere; the service looks. */
export default defineApiHandler({
  allow: 'signed-in',
  params: z.object({ id: idSchema }),
  handle: async ({ context, params }) => {
    await cancelAbsence(context, params.id)
    return { done: true }
  },
})
