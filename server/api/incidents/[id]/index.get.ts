import * as z from 'zod'
import { siteOfIncident } from '#server/database/queries/incidents'
import { viewIncident } from '#server/services/incidents'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'delivery.read',
  params: z.object({ id: idSchema }),
  siteOf: (db, { params }) => siteOfIncident(db, params.id),
  handle: ({ context, params }) => viewIncident(context, params.id),
})
