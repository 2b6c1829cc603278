import { addPractice } from '#server/services/change-practice'
import { practiceSchema } from '#shared/schemas/directory'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'directory.write',
  body: practiceSchema,
  handle: ({ context, body }) => addPractice(context, body),
})
