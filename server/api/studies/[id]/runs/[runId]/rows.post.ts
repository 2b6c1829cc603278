import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { addRow } from '#server/services/save-row'
import { idSchema } from '#shared/schemas/common'
import { addRowSchema } from '#shared/schemas/bench'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema, runId: idSchema }),
  body: addRowSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params, body }) => addRow(context, { id: params.id, runId: params.runId, ...body }),
})
