import { addSite } from '#server/services/change-site'
import { siteSchema } from '#shared/schemas/user'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'site.write',
  body: siteSchema,
  handle: ({ context, body }) => addSite(context, body),
})
