import * as z from 'zod'
import { siteOfReport } from '#server/database/queries/reports'
import { viewReport } from '#server/services/view-report'
import { idSchema } from '#shared/schemas/common'
import { versionQuerySchema } from '#shared/schemas/report'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'report.read',
  params: z.object({ id: idSchema }),
  query: versionQuerySchema,
  siteOf: (db, { params }) => siteOfReport(db, params.id),
  handle: ({ context, params, query }) => viewReport(context, { reportId: params.id, ...query }),
})
