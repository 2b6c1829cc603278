import { ownEmergencyAccesses } from '#server/services/open-in-emergency'
import { defineApiHandler } from '#server/utils/api-handler'

/** What the reader has open in an emergency now. */
export default defineApiHandler({
  allow: 'report.sign',
  handle: ({ context }) => ownEmergencyAccesses(context),
})
