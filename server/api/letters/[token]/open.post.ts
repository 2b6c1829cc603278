import * as z from 'zod'
import { openLetter } from '#server/services/answer-letter'
import { openLetterSchema } from '#shared/schemas/letter'
import { defineApiHandler } from '#server/utils/api-handler'
import { clientAddress } from '#server/utils/auth'

export default defineApiHandler({
  allow: 'public',
  params: z.object({ token: z.string().min(20).max(100) }),
  body: openLetterSchema,
  handle: ({ event, context, params, body }) => openLetter(context, { token: params.token, address: clientAddress(event), ...body }),
})
