import * as z from 'zod'
import { takeTask } from '#server/services/take-task'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'task.read',
  params: z.object({ id: idSchema }),
  handle: ({ context, params }) => takeTask(context, params.id),
})
