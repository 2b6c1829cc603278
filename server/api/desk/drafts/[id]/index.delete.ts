import * as z from 'zod'
import { discardDraft } from '#server/services/desk-drafts'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'desk.refer',
  params: z.object({ id: idSchema }),
  handle: async ({ context, params }) => {
    await discardDraft(context, params.id)
    return { done: true }
  },
})
