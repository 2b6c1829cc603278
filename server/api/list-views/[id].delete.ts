import * as z from 'zod'
import { removeListView } from '#server/services/list-views'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'referral.read',
  params: z.object({ id: idSchema }),
  handle: async ({ context, params }) => {
    await removeListView(context, params.id)
    return { removed: true }
  },
})
