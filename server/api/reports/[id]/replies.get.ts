import * as z from 'zod'
import { siteOfReport } from '#server/database/queries/reports'
import { repliesOfReport } from '#server/services/answer-reply'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'report.read',
  params: z.object({ id: idSchema }),
  siteOf: (db, { params }) => siteOfReport(db, params.id),
  handle: ({ context, params }) => repliesOfReport(context, params.id),
})
