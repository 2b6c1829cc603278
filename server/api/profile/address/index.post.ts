import { sendOwnAddressCode } from '#server/services/confirm-own-address'
import { ownAddressSchema } from '#shared/schemas/user'
import { defineApiHandler } from '#server/utils/api-handler'

/** Mails a code to the own address, present or new. */
export default defineApiHandler({
  allow: 'signed-in',
  duringEnrolment: true,
  body: ownAddressSchema,
  handle: async ({ context, user, body }) => {
    await sendOwnAddressCode(context, { userId: user.id, ...body })
    return { done: true }
  },
})
