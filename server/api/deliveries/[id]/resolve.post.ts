import * as z from 'zod'
import { siteOfDelivery } from '#server/database/queries/deliveries'
import { resolveDelivery } from '#server/services/change-delivery'
import { resolveDeliverySchema } from '#shared/schemas/delivery'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'delivery.manage',
  params: z.object({ id: idSchema }),
  body: resolveDeliverySchema,
  siteOf: (db, { params }) => siteOfDelivery(db, params.id),
  handle: ({ context, params, body }) => resolveDelivery(context, { id: params.id, ...body }),
})
