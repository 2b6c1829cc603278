import { askForReset } from '#server/services/forgotten-password'
import { forgottenPasswordSchema } from '#shared/schemas/user'
import { defineApiHandler } from '#server/utils/api-handler'
import { clientAddress } from '#server/utils/auth'
import { limitByAddress } from '#server/utils/limit-by-address'

/** Every answer takes this long: whether a mail was written must not be heard in the time. */
const ANSWER_MS = 400

/** One answer for every address, whether an account has it or not. */
export default defineApiHandler({
  allow: 'public',
  body: forgottenPasswordSchema,
  handle: async ({ event, context, body }) => {
    await limitByAddress(event)
    const wait = new Promise(done => setTimeout(done, ANSWER_MS))
    await askForReset(context, { email: body.email, address: clientAddress(event) })
    await wait
    return { done: true }
  },
})
