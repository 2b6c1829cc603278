import * as z from 'zod'
import { searchAll } from '#server/database/queries/search'
import { sitesWhere } from '#server/services/context'
import { defineApiHandler } from '#server/utils/api-handler'

/** The search of the bar: people of the register; referrals and studies only of sites where the person may see them. */
export default defineApiHandler({
  allow: 'patient.search',
  query: z.object({ words: z.string().trim().min(2, 'Enter at least two letters.').max(200) }),
  handle: ({ context, query }) => searchAll(context.db, query.words, { referrals: sitesWhere(context.actor, 'referral.read'), studies: sitesWhere(context.actor, 'study.read') }),
})
