import { listLedger } from '#server/database/queries/ledger'
import { ledgerQuerySchema } from '#shared/schemas/user'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'audit.read',
  query: ledgerQuerySchema,
  handle: ({ context, sites, query }) => listLedger(context.db, sites, query),
})
