import { proposeAdoption } from '#server/services/adopt-set'
import { adoptionSchema } from '#shared/schemas/shelf'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'shelf.propose',
  body: adoptionSchema,
  siteOf: async (_db, { body }) => body.siteId,
  handle: ({ context, body }) => proposeAdoption(context, body),
})
