import * as z from 'zod'
import { policyInForce } from '#server/database/queries/policies'
import { listReferrals, referralSorts } from '#server/database/queries/referral-list'
import { organisationDay } from '#server/services/organisation-day'
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
    /** 'me' or the id of a person */
    owner: z.string().max(64).default(''),
    overdue: z.enum(['', '1']).default(''),
    cameBack: z.enum(['', '1']).default(''),
    urgency: z.enum(['', ...urgencies]).default(''),
    sort: z.enum(referralSorts).default('stateSince'),
  }),
  handle: async ({ context, query, sites, user }) => listReferrals(context.db, {
    ...query, states: query.state, urgency: query.urgency || undefined,
    ownerId: query.owner === 'me' ? user.id : query.owner || undefined, overdue: query.overdue === '1', cameBack: query.cameBack === '1',
    now: context.clock(), clocks: (await policyInForce(context.db, 'clocks', null, await organisationDay(context))).body,
    siteIds: query.siteId ? sites.filter(site => site === query.siteId) : sites,
  }),
})
