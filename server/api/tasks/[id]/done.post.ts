import * as z from 'zod'
import { finishTask } from '#server/services/finish-task'
import { idSchema } from '#shared/schemas/common'
import { finishTaskSchema } from '#shared/schemas/delivery'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'task.read',
  params: z.object({ id: idSchema }),
  body: finishTaskSchema,
  handle: ({ context, params, body }) => finishTask(context, { id: params.id, resolution: body?.resolution ?? '' }),
})
