import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { removeRun } from '#server/services/save-run'
import { idSchema } from '#shared/schemas/common'
import { removeSchema } from '#shared/schemas/bench'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema, runId: idSchema }),
  body: removeSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: async ({ context, params, body }) => {
    await removeRun(context, { id: params.id, runId: params.runId, ...body })
    return { removed: true }
  },
})
