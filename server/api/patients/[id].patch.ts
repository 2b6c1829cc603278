import * as z from 'zod'
import { changePatient } from '#server/services/save-patient'
import { idSchema } from '#shared/schemas/common'
import { changePatientSchema } from '#shared/schemas/patient'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'patient.write',
  params: z.object({ id: idSchema }),
  body: changePatientSchema,
  handle: ({ context, params, body }) => changePatient(context, { id: params.id, ...body }),
})
