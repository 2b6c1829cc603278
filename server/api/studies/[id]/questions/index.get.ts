import * as z from 'zod'
import { questionsOfStudy } from '#server/database/queries/questions'
import { siteOfStudy } from '#server/database/queries/studies'
import { defineApiHandler } from '#server/utils/api-handler'
import { idSchema } from '#shared/schemas/common'

export default defineApiHandler({
  allow: 'study.read',
  params: z.object({ id: idSchema }),
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params }) => questionsOfStudy(context.db, params.id),
})
