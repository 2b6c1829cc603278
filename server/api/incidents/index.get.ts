import { listIncidents } from '#server/services/incidents'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'delivery.read',
  handle: ({ context, sites }) => listIncidents(context, sites),
})
