import { setPassword } from '#server/services/set-up-link'
import { setPasswordSchema } from '#shared/schemas/user'
import { defineApiHandler } from '#server/utils/api-handler'
import { limitByAddress } from '#server/utils/limit-by-address'

/** Sets a password through a one-time link; the person then signs in as always. */
export default defineApiHandler({
  allow: 'public',
  body: setPasswordSchema,
  handle: async ({ event, context, body }) => {
    await limitByAddress(event)
    await setPassword(context, body)
    return { done: true }
  },
})
