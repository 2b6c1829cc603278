import { setResponseHeaders } from 'h3'
import * as z from 'zod'
import { collectReport } from '#server/services/collect-report'
import { collectSchema } from '#shared/schemas/delivery'
import { defineApiHandler } from '#server/utils/api-handler'
import { clientAddress } from '#server/utils/auth'

export default defineApiHandler({
  allow: 'public',
  params: z.object({ token: z.string().min(20).max(100) }),
  body: collectSchema,
  handle: async ({ event, context, params, body }) => {
    const { bytes, number, version } = await collectReport(context, { token: params.token, address: clientAddress(event), ...body })
    setResponseHeaders(event, { 'Content-Type': 'application/pdf', 'Content-Disposition': `attachment; filename="${number}-version-${version}.pdf"`, 'X-Content-Type-Options': 'nosniff' })
    return Buffer.from(bytes)
  },
})
