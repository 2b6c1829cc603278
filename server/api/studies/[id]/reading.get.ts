import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { viewReading } from '#server/services/view-reading'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'report.write',
  params: z.object({ id: idSchema }),
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params }) => viewReading(context, params.id),
})
