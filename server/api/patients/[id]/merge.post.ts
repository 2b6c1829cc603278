import * as z from 'zod'
import { mergePatients } from '#server/services/merge-patients'
import { idSchema } from '#shared/schemas/common'
import { mergeSchema } from '#shared/schemas/patient-history'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'patient.merge',
  params: z.object({ id: idSchema }),
  body: mergeSchema,
  handle: ({ context, params, body }) => mergePatients(context, { keptId: params.id, ...body }),
})
