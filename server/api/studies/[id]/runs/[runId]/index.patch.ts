import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { changeRun } from '#server/services/save-run'
import { idSchema } from '#shared/schemas/common'
import { changeRunSchema } from '#shared/schemas/bench'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema, runId: idSchema }),
  body: changeRunSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params, body }) => changeRun(context, { id: params.id, runId: params.runId, ...body }),
})
