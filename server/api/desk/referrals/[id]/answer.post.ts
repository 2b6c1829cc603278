import * as z from 'zod'
import { answerRequest } from '#server/services/desk-requests'
import { idSchema } from '#shared/schemas/common'
import { answerRequestSchema } from '#shared/schemas/desk'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'desk.refer',
  params: z.object({ id: idSchema }),
  body: answerRequestSchema,
  handle: async ({ context, params, body }) => {
    await answerRequest(context, { id: params.id, ...body })
    return { answered: true }
  },
})
