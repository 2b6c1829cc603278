import * as z from 'zod'
import { sendWaiting } from '#server/services/view-directory'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'directory.write',
  params: z.object({ id: idSchema }),
  handle: ({ context, params }) => sendWaiting(context, params.id),
})
