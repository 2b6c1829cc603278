import * as z from 'zod'
import { protocolsAt } from '#server/services/protocols'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

/** The protocols in force at a site today, with the version of their list. */
export default defineApiHandler({
  allow: 'referral.read',
  query: z.object({ siteId: idSchema }),
  siteOf: async (_db, { query }) => query.siteId,
  handle: ({ context, query }) => protocolsAt(context, context.db, { siteId: query.siteId }),
})
