import { makeFirstAdministrator } from '#server/services/first-run'
import { firstAdministratorSchema } from '#shared/schemas/user'
import { defineApiHandler } from '#server/utils/api-handler'
import { limitByAddress } from '#server/utils/limit-by-address'

export default defineApiHandler({
  allow: 'public',
  body: firstAdministratorSchema,
  handle: async ({ event, context, body }) => {
    await limitByAddress(event)
    await makeFirstAdministrator(context, body)
    return { done: true }
  },
})
