import * as z from 'zod'
import { siteOfReport } from '#server/database/queries/reports'
import { sendToRecipient } from '#server/services/send-to-recipient'
import { idSchema } from '#shared/schemas/common'
import { sendToSchema } from '#shared/schemas/delivery'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'delivery.manage',
  params: z.object({ id: idSchema }),
  body: sendToSchema,
  siteOf: (db, { params }) => siteOfReport(db, params.id),
  handle: ({ context, params, body }) => sendToRecipient(context, { reportId: params.id, ...body }),
})
