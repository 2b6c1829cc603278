import * as z from 'zod'
import { replyOwn } from '#server/services/view-desk'
import { idSchema } from '#shared/schemas/common'
import { deskReplySchema } from '#shared/schemas/desk'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'desk.read',
  params: z.object({ id: idSchema }),
  body: deskReplySchema,
  handle: ({ context, params, body }) => replyOwn(context, { id: params.id, ...body }),
})
