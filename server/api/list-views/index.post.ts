import { saveListView } from '#server/services/list-views'
import { listViewSchema } from '#shared/schemas/list-view'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'referral.read',
  body: listViewSchema,
  handle: ({ context, body }) => saveListView(context, body),
})
