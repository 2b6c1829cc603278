import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { removeRow } from '#server/services/save-row'
import { idSchema } from '#shared/schemas/common'
import { removeSchema } from '#shared/schemas/bench'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema, rowId: idSchema }),
  body: removeSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: async ({ context, params, body }) => {
    await removeRow(context, { id: params.id, rowId: params.rowId, ...body })
    return { removed: true }
  },
})
