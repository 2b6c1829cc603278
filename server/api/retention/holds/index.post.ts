import { setLegalHold } from '#server/services/retention'
import { legalHoldSchema } from '#shared/schemas/retention'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'retention.manage',
  body: legalHoldSchema,
  handle: ({ context, body }) => setLegalHold(context, body),
})
