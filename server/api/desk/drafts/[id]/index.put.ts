import * as z from 'zod'
import { saveDraft } from '#server/services/desk-drafts'
import { idSchema } from '#shared/schemas/common'
import { saveDraftSchema } from '#shared/schemas/desk'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'desk.refer',
  params: z.object({ id: idSchema }),
  body: saveDraftSchema,
  handle: ({ context, params, body }) => saveDraft(context, { id: params.id, ...body }),
})
