import * as z from 'zod'
import { viewLetter } from '#server/services/answer-letter'
import { defineApiHandler } from '#server/utils/api-handler'
import { clientAddress } from '#server/utils/auth'

export default defineApiHandler({
  allow: 'public',
  params: z.object({ token: z.string().min(20).max(100) }),
  handle: ({ event, context, params }) => viewLetter(context, { token: params.token, address: clientAddress(event) }),
})
