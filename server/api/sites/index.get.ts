import { listSites } from '#server/services/view-sites'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'site.read',
  handle: ({ context, sites }) => listSites(context, sites),
})
