import * as z from 'zod'
import { siteOfReport } from '#server/database/queries/reports'
import { makeNewVersion } from '#server/services/make-new-version'
import { newVersionSchema } from '#shared/schemas/report'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'report.correct',
  params: z.object({ id: idSchema }),
  body: newVersionSchema,
  siteOf: (db, { params }) => siteOfReport(db, params.id),
  handle: ({ context, params, body }) => makeNewVersion(context, { reportId: params.id, ...body }),
})
