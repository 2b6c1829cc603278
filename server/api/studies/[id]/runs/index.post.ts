import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { addRun } from '#server/services/save-run'
import { idSchema } from '#shared/schemas/common'
import { addRunSchema } from '#shared/schemas/bench'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema }),
  body: addRunSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params, body }) => addRun(context, { id: params.id, ...body }),
})
