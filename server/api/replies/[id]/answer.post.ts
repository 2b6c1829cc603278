import * as z from 'zod'
import { answerReply, siteOfReply } from '#server/services/answer-reply'
import { idSchema } from '#shared/schemas/common'
import { answerReplySchema } from '#shared/schemas/delivery'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'report.write',
  params: z.object({ id: idSchema }),
  body: answerReplySchema,
  siteOf: (db, { params }) => siteOfReply(db, params.id),
  handle: ({ context, params, body }) => answerReply(context, { id: params.id, ...body }),
})
