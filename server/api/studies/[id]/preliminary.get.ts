import { setResponseHeaders } from 'h3'
import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { printPreliminary } from '#server/services/print-preliminary'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

/** A print to look at before signing. The print itself is the event that is logged; no record changes. */
export default defineApiHandler({
  allow: 'report.write',
  params: z.object({ id: idSchema }),
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: async ({ event, context, params }) => {
    const bytes = await printPreliminary(context, params.id)
    setResponseHeaders(event, { 'Content-Type': 'application/pdf', 'Content-Disposition': 'inline; filename="preliminary.pdf"', 'X-Content-Type-Options': 'nosniff' })
    return Buffer.from(bytes)
  },
})
