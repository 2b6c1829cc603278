import { openInEmergency } from '#server/services/open-in-emergency'
import { openInEmergencySchema } from '#shared/schemas/reading'
import { defineApiHandler } from '#server/utils/api-handler'

/** The study belongs to a site where the asker holds no role: the reason and the review stand in place of one. */
export default defineApiHandler({
  allow: 'report.sign',
  body: openInEmergencySchema,
  handle: ({ context, body }) => openInEmergency(context, body),
})
