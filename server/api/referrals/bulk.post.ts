import { actOnReferrals } from '#server/services/bulk-referrals'
import { bulkSchema } from '#shared/schemas/bulk'
import { defineApiHandler } from '#server/utils/api-handler'

/** Accept, reassign or remind several referrals, or see first what would happen. The action is asked for at the site of each. */
export default defineApiHandler({
  allow: 'referral.read',
  body: bulkSchema,
  handle: ({ context, body }) => actOnReferrals(context, body),
})
