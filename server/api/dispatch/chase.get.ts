import { chaseList } from '#server/services/chase'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'delivery.read',
  handle: ({ context, sites }) => chaseList(context, sites),
})
