import { addAbsence } from '#server/services/keep-absence'
import { absenceSchema } from '#shared/schemas/absence'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'signed-in',
  body: absenceSchema,
  handle: async ({ context, user, body }) => ({ id: await addAbsence(context, user.id, body) }),
})
