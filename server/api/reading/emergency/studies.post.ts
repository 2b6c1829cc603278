import { searchForEmergency } from '#server/services/open-in-emergency'
import { emergencySearchSchema } from '#shared/schemas/reading'
import { defineApiHandler } from '#server/utils/api-handler'

/** A POST because the words may be a name, and names do not belong into addresses. */
export default defineApiHandler({
  allow: 'report.sign',
  body: emergencySearchSchema,
  handle: ({ context, body }) => searchForEmergency(context, body.words),
})
