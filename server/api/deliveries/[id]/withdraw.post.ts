import * as z from 'zod'
import { siteOfDelivery } from '#server/database/queries/deliveries'
import { withdrawDelivery } from '#server/services/change-delivery'
import { withdrawSchema } from '#shared/schemas/delivery'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'delivery.manage',
  params: z.object({ id: idSchema }),
  body: withdrawSchema,
  siteOf: (db, { params }) => siteOfDelivery(db, params.id),
  handle: ({ context, params, body }) => withdrawDelivery(context, { id: params.id, ...body }),
})
