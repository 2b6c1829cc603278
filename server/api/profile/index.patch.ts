import { changeProfile } from '#server/services/change-password'
import { profileSchema } from '#shared/schemas/user'
import { defineApiHandler } from '#server/utils/api-handler'

/** Name and credentials as reports print them. */
export default defineApiHandler({
  allow: 'signed-in',
  duringEnrolment: true,
  body: profileSchema,
  handle: async ({ context, user, body }) => {
    await changeProfile(context, user.id, body)
    return { done: true }
  },
})
