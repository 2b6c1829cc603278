import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { assignStudy } from '#server/services/take-study'
import { idSchema } from '#shared/schemas/common'
import { assignSchema } from '#shared/schemas/reading'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.assign',
  params: z.object({ id: idSchema }),
  body: assignSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params, body }) => assignStudy(context, { id: params.id, ...body }),
})
