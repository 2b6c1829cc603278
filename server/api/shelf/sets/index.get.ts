import { listSets } from '#server/services/view-shelf'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'shelf.read',
  handle: ({ context, sites }) => listSets(context, sites),
})
