import * as z from 'zod'
import { answerLetter } from '#server/services/answer-letter'
import { answerLetterSchema } from '#shared/schemas/letter'
import { defineApiHandler } from '#server/utils/api-handler'
import { clientAddress } from '#server/utils/auth'

export default defineApiHandler({
  allow: 'public',
  params: z.object({ token: z.string().min(20).max(100) }),
  body: answerLetterSchema,
  handle: async ({ event, context, params, body }) => {
    await answerLetter(context, { token: params.token, address: clientAddress(event), ...body })
    return { answered: true }
  },
})
