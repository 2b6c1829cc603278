import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { markReady } from '#server/services/save-draft'
import { readySchema } from '#shared/schemas/report'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'report.write',
  params: z.object({ id: idSchema }),
  body: readySchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params, body }) => markReady(context, { studyId: params.id, ...body }),
})
