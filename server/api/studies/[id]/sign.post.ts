import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { signReport } from '#server/services/sign-report'
import { signSchema } from '#shared/schemas/report'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'report.sign',
  params: z.object({ id: idSchema }),
  body: signSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params, body }) => signReport(context, { studyId: params.id, ...body }),
})
