import * as z from 'zod'
import { viewDeskReport } from '#server/services/view-desk'
import { idSchema } from '#shared/schemas/common'
import { versionQuerySchema } from '#shared/schemas/report'
import { defineApiHandler } from '#server/utils/api-handler'

/** Own or not is decided by what was sent to the person, not by a site: everything else is not found. */
export default defineApiHandler({
  allow: 'desk.read',
  params: z.object({ id: idSchema }),
  query: versionQuerySchema,
  handle: ({ context, params, query }) => viewDeskReport(context, { reportId: params.id, ...query }),
})
