import { openQuestions } from '#server/database/queries/questions'
import { defineApiHandler } from '#server/utils/api-handler'

/** What waits for an answer, for those who may give one. */
export default defineApiHandler({
  allow: 'question.answer',
  handle: ({ context, sites }) => openQuestions(context.db, sites),
})
