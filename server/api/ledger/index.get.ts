import { viewLedger } from '#server/services/view-ledger'
import { ledgerQuerySchema } from '#shared/schemas/user'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'audit.read',
  query: ledgerQuerySchema,
  handle: ({ context, sites, query }) => viewLedger(context, sites, query),
})
