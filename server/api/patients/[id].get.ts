import * as z from 'zod'
import { viewPatient } from '#server/services/view-patient'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'patient.read',
  params: z.object({ id: idSchema }),
  handle: ({ context, params }) => viewPatient(context, params.id),
})
