import * as z from 'zod'
import { dispatchPage } from '#server/database/queries/deliveries'
import { pageQuerySchema } from '#shared/schemas/common'
import { deliveryStates } from '#shared/states'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'delivery.read',
  query: pageQuerySchema.extend({ state: z.enum(deliveryStates).optional(), siteId: z.string().optional() }),
  handle: ({ context, query, sites }) => dispatchPage(context.db, {
    siteIds: query.siteId ? sites.filter(site => site === query.siteId) : sites,
    ...(query.state ? { state: query.state } : {}),
  }, query),
})
