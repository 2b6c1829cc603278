import * as z from 'zod'
import { addOutsideStudy } from '#server/services/outside-studies'
import { idSchema } from '#shared/schemas/common'
import { outsideStudySchema } from '#shared/schemas/patient-history'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'patient.write',
  params: z.object({ id: idSchema }),
  body: outsideStudySchema,
  handle: ({ context, params, body }) => addOutsideStudy(context, { patientId: params.id, ...body }),
})
