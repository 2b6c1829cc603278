import * as z from 'zod'
import { viewPractice } from '#server/services/view-directory'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'directory.read',
  params: z.object({ id: idSchema }),
  handle: ({ context, params }) => viewPractice(context, params.id),
})
