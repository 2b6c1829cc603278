import * as z from 'zod'
import { possibleOwners } from '#server/services/reassign-referral'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

/** Who can look after referrals: at one site, or at any of one's own. */
export default defineApiHandler({
  allow: 'referral.triage',
  query: z.object({ siteId: idSchema.optional() }),
  handle: async ({ context, query, sites }) => {
    const asked = query.siteId ? sites.filter(site => site === query.siteId) : sites
    const people = (await Promise.all(asked.map(site => possibleOwners(context, site)))).flat()
    return [...new Map(people.map(person => [person.id, person])).values()].toSorted((a, b) => a.name.localeCompare(b.name))
  },
})
