import { addPatient } from '#server/services/save-patient'
import { patientSchema } from '#shared/schemas/patient'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'patient.write',
  body: patientSchema,
  handle: ({ context, body }) => addPatient(context, body),
})
