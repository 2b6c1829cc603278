import { signOutEverywhere } from '#server/services/change-password'
import { defineApiHandler } from '#server/utils/api-handler'

/** Ends every session of this person, the one that asks too. */
export default defineApiHandler({
  allow: 'signed-in',
  duringEnrolment: true,
  handle: async ({ context, user }) => ({ ended: await signOutEverywhere(context, user.id) }),
})
