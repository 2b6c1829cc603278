import * as z from 'zod'
import { questionView, siteOfQuestion } from '#server/database/queries/questions'
import { defineApiHandler } from '#server/utils/api-handler'
import { DomainError } from '#shared/errors'
import { idSchema } from '#shared/schemas/common'

export default defineApiHandler({
  allow: 'question.answer',
  params: z.object({ id: idSchema }),
  siteOf: (db, { params }) => siteOfQuestion(db, params.id),
  handle: async ({ context, params }) => {
    const question = await questionView(context.db, params.id)
    if (!question) throw new DomainError('not-found')
    return question
  },
})
