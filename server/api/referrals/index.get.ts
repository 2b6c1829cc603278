import * as z from 'zod'
import { listReferrals, referralSorts } from '#server/database/queries/referral-list'
import { pageQuerySchema } from '#shared/schemas/common'
import { urgencies } from '#shared/schemas/referral'
import { referralStates } from '#shared/states'
import { defineApiHandler } from '#server/utils/api-handler'

/** One state or several, separated by commas. */
const states = z.string().max(200).default('').transform(text => text.split(',').filter(Boolean)).pipe(z.array(z.enum(referralStates)))

/** The worklist: sorted, filtered, paged and counted on the server. */
export default defineApiHandler({
  allow: 'referral.read',
  query: pageQuerySchema.extend({
    state: states,
    siteId: z.string().max(64).default(''),
    urgency: z.enum(['', ...urgencies]).default(''),
    sort: z.enum(referralSorts).default('stateSince'),
  }),
  handle: ({ context, query, sites }) => listReferrals(context.db, {
    ...query, states: query.state, urgency: query.urgency || undefined,
    siteIds: query.siteId ? sites.filter(site => site === query.siteId) : sites,
  }),
})
