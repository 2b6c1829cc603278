import * as z from 'zod'
import { siteOfQuestion } from '#server/database/queries/questions'
import { withdrawQuestion } from '#server/services/ask-reader'
import { defineApiHandler } from '#server/utils/api-handler'
import { idSchema } from '#shared/schemas/common'

export default defineApiHandler({
  allow: 'question.ask',
  params: z.object({ id: idSchema }),
  siteOf: (db, { params }) => siteOfQuestion(db, params.id),
  handle: ({ context, params }) => withdrawQuestion(context, params.id),
})
