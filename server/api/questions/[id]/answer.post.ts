import * as z from 'zod'
import { siteOfQuestion } from '#server/database/queries/questions'
import { answerQuestion } from '#server/services/ask-reader'
import { defineApiHandler } from '#server/utils/api-handler'
import { idSchema } from '#shared/schemas/common'
import { answerSchema } from '#shared/schemas/question'

export default defineApiHandler({
  allow: 'question.answer',
  params: z.object({ id: idSchema }),
  body: answerSchema,
  siteOf: (db, { params }) => siteOfQuestion(db, params.id),
  handle: ({ context, params, body }) => answerQuestion(context, { id: params.id, ...body }),
})
