import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { returnStudy } from '#server/services/take-study'
import { returnSchema } from '#shared/schemas/bench'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.return',
  params: z.object({ id: idSchema }),
  body: returnSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params, body }) => returnStudy(context, { id: params.id, ...body }),
})
