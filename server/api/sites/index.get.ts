import { listSites } from '#server/database/queries/sites'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'site.read',
  handle: ({ context, sites }) => listSites(context.db, sites),
})
