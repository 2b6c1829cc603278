import * as z from 'zod'
import { viewHistory } from '#server/services/view-history'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'patient.read',
  params: z.object({ id: idSchema }),
  handle: ({ context, params }) => viewHistory(context, params.id),
})
