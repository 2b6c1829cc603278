import * as z from 'zod'
import { viewDraft } from '#server/services/desk-drafts'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

/** Own or not is decided by who wrote it: everything else is not found. */
export default defineApiHandler({
  allow: 'desk.refer',
  params: z.object({ id: idSchema }),
  handle: ({ context, params }) => viewDraft(context, params.id),
})
