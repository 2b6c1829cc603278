import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { startVisit } from '#server/services/continue-study'
import { idSchema } from '#shared/schemas/common'
import { visitSchema } from '#shared/schemas/bench-day'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema }),
  body: visitSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params, body }) => startVisit(context, { id: params.id, ...body }),
})
