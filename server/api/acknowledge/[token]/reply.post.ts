import * as z from 'zod'
import { replyToReport } from '#server/services/answer-link'
import { replySchema } from '#shared/schemas/delivery'
import { defineApiHandler } from '#server/utils/api-handler'
import { clientAddress } from '#server/utils/auth'

export default defineApiHandler({
  allow: 'public',
  params: z.object({ token: z.string().min(20).max(100) }),
  body: replySchema,
  handle: ({ event, context, params, body }) => replyToReport(context, { token: params.token, address: clientAddress(event), ...body }),
})
