import { longRead } from '#server/services/long-read'
import { organisationDay } from '#server/services/organisation-day'
import { whatIfSchema } from '#shared/schemas/shelf'
import { defineApiHandler } from '#server/utils/api-handler'

/** Which verdicts of a site's latest studies would change with another set. Numbers of studies only, no patient. */
export default defineApiHandler({
  allow: 'shelf.propose',
  query: whatIfSchema,
  siteOf: async (_db, { query }) => query.siteId,
  handle: async ({ context, query: { insteadOf = null, ...query } }) => longRead(context, 'whatIf', { ...query, insteadOf, today: await organisationDay(context) }),
})
