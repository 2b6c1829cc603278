import { nobodyExists } from '#server/services/first-run'
import { defineApiHandler } from '#server/utils/api-handler'

/** Whether the first administrator is still to be made. */
export default defineApiHandler({
  allow: 'public',
  handle: async ({ context }) => ({ needed: await nobodyExists(context) }),
})
