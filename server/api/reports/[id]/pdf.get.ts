import { setResponseHeaders } from 'h3'
import * as z from 'zod'
import { placeOfReport, siteOfReport } from '#server/database/queries/reports'
import { reportPdf } from '#server/services/make-report-pdf'
import { recordView } from '#server/services/record-view'
import { versionAsked } from '#server/services/view-report'
import { idSchema } from '#shared/schemas/common'
import { versionQuerySchema } from '#shared/schemas/report'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'report.read',
  params: z.object({ id: idSchema }),
  query: versionQuerySchema,
  siteOf: (db, { params }) => siteOfReport(db, params.id),
  handle: async ({ event, context, params, query }) => {
    const version = await versionAsked(context, params.id, query.version)
    const pdf = await reportPdf(context, version.id)
    recordView(context, { subject: 'report', subjectId: params.id, ...await placeOfReport(context.db, params.id) })
    setResponseHeaders(event, { 'Content-Type': 'application/pdf', 'Content-Disposition': 'inline; filename="report.pdf"', 'X-Content-Type-Options': 'nosniff' })
    return Buffer.from(pdf.bytes)
  },
})
