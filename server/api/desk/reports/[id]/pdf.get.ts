import { setResponseHeaders } from 'h3'
import * as z from 'zod'
import { deskReportPdf } from '#server/services/view-desk'
import { idSchema } from '#shared/schemas/common'
import { versionQuerySchema } from '#shared/schemas/report'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'desk.read',
  params: z.object({ id: idSchema }),
  query: versionQuerySchema,
  handle: async ({ event, context, params, query }) => {
    const bytes = await deskReportPdf(context, { reportId: params.id, ...query })
    setResponseHeaders(event, { 'Content-Type': 'application/pdf', 'Content-Disposition': 'inline; filename="report.pdf"', 'X-Content-Type-Options': 'nosniff' })
    return Buffer.from(bytes)
  },
})
