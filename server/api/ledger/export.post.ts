import { exportLedger } from '#server/services/view-ledger'
import { ledgerExportSchema } from '#shared/schemas/user'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'audit.read',
  body: ledgerExportSchema,
  handle: ({ context, sites, body }) => exportLedger(context, sites, body),
})
