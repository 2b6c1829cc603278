import * as z from 'zod'
import { siteOfDelivery } from '#server/database/queries/deliveries'
import { renewLink } from '#server/services/renew-link'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'delivery.manage',
  params: z.object({ id: idSchema }),
  siteOf: (db, { params }) => siteOfDelivery(db, params.id),
  handle: ({ context, params }) => renewLink(context, params.id),
})
