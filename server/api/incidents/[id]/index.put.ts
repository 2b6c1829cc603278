import * as z from 'zod'
import { siteOfIncident } from '#server/database/queries/incidents'
import { changeIncident } from '#server/services/incidents'
import { idSchema } from '#shared/schemas/common'
import { changeIncidentSchema } from '#shared/schemas/incident'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'delivery.manage',
  params: z.object({ id: idSchema }),
  body: changeIncidentSchema,
  siteOf: (db, { params }) => siteOfIncident(db, params.id),
  handle: ({ context, params, body }) => changeIncident(context, { id: params.id, ...body }),
})
