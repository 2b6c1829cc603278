import * as z from 'zod'
import { firstFree } from '#server/services/first-free'
import { idSchema, isoDateSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'referral.book',
  query: z.object({ referralId: idSchema, siteId: idSchema, minutes: z.coerce.number().int().min(10).max(240).default(60), from: isoDateSchema.optional() }),
  siteOf: async (_db, { query }) => query.siteId,
  handle: ({ context, query }) => firstFree(context, query),
})
