import { walkIn } from '#server/services/walk-in'
import { walkInSchema } from '#shared/schemas/bench-day'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'referral.walk-in',
  body: walkInSchema,
  siteOf: async (_db, { body }) => body.siteId,
  handle: ({ context, body }) => walkIn(context, body),
})
