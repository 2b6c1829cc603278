import { importReferrals } from '#server/services/import-referrals'
import { referralImportSchema } from '#shared/schemas/referral-import'
import { defineApiHandler } from '#server/utils/api-handler'

/** Checks a file of referrals, and stores them all when `store` is set and no line has an error. */
export default defineApiHandler({
  allow: 'referral.import',
  body: referralImportSchema,
  siteOf: async (_db, { body }) => body.siteId,
  handle: ({ context, body }) => importReferrals(context, body),
})
