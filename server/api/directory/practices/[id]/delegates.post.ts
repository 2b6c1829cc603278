import * as z from 'zod'
import { addDelegate } from '#server/services/practice-delegates'
import { idSchema } from '#shared/schemas/common'
import { delegateSchema } from '#shared/schemas/directory'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'directory.write',
  params: z.object({ id: idSchema }),
  body: delegateSchema,
  handle: ({ context, params, body }) => addDelegate(context, params.id, body),
})
