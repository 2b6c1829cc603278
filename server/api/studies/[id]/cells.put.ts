import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { saveCells } from '#server/services/save-cells'
import { idSchema } from '#shared/schemas/common'
import { saveCellsSchema } from '#shared/schemas/bench'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema }),
  body: saveCellsSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params, body }) => saveCells(context, { id: params.id, ...body }),
})
