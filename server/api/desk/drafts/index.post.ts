import { beginDraft } from '#server/services/desk-drafts'
import { deskDraftSchema } from '#shared/schemas/desk'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'desk.refer',
  body: deskDraftSchema,
  handle: ({ context, body }) => beginDraft(context, body),
})
