import { addReferral } from '#server/services/save-referral'
import { viewReferral } from '#server/services/view-referral'
import { referralSchema } from '#shared/schemas/referral'
import { defineApiHandler } from '#server/utils/api-handler'

/** A new draft, however incomplete. */
export default defineApiHandler({
  allow: 'referral.write',
  body: referralSchema,
  siteOf: async (_db, { body }) => body.siteId,
  handle: async ({ context, body }) => {
    const { id } = await addReferral(context, body)
    return viewReferral(context, id)
  },
})
