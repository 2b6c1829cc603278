import * as z from 'zod'
import { freeTimes } from '#server/services/free-times'
import { idSchema, isoDateSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

/** Rooms and technologists of a site, and what is taken on a day. */
export default defineApiHandler({
  allow: 'referral.book',
  query: z.object({ siteId: idSchema, date: isoDateSchema }),
  siteOf: async (_db, { query }) => query.siteId,
  handle: ({ context, query }) => freeTimes(context, query),
})
