import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { commentOnStudy } from '#server/services/comment-on-study'
import { idSchema } from '#shared/schemas/common'
import { commentSchema } from '#shared/schemas/bench-day'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.read',
  params: z.object({ id: idSchema }),
  body: commentSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params, body }) => commentOnStudy(context, { id: params.id, ...body }),
})
