import * as z from 'zod'
import { siteOfReport } from '#server/database/queries/reports'
import { notePatientCopy } from '#server/services/patient-copy'
import { idSchema } from '#shared/schemas/common'
import { patientCopySchema } from '#shared/schemas/report'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'report.copy',
  params: z.object({ id: idSchema }),
  body: patientCopySchema,
  siteOf: (db, { params }) => siteOfReport(db, params.id),
  handle: async ({ context, params, body }) => {
    await notePatientCopy(context, { reportId: params.id, ...body })
    return { done: true }
  },
})
