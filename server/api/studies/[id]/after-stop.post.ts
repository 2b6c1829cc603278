import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { askTechnicalReport, closeStopped } from '#server/services/after-stop'
import { idSchema } from '#shared/schemas/common'
import { afterStopSchema } from '#shared/schemas/bench-day'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema }),
  body: afterStopSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: async ({ context, params, body }) => {
    if (body.next === 'technical-report') await askTechnicalReport(context, { id: params.id })
    else await closeStopped(context, { id: params.id, reason: body.reason })
    return { next: body.next }
  },
})
