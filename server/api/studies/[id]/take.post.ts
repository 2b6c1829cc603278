import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { takeStudy } from '#server/services/take-study'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'report.write',
  params: z.object({ id: idSchema }),
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params }) => takeStudy(context, params.id),
})
