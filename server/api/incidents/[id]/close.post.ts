import * as z from 'zod'
import { siteOfIncident } from '#server/database/queries/incidents'
import { closeIncident } from '#server/services/incidents'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'delivery.manage',
  params: z.object({ id: idSchema }),
  body: z.object({ revision: z.number().int().min(1) }),
  siteOf: (db, { params }) => siteOfIncident(db, params.id),
  handle: ({ context, params, body }) => closeIncident(context, { id: params.id, ...body }),
})
