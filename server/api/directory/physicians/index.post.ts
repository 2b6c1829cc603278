import { addPhysician } from '#server/services/change-physician'
import { newPhysicianSchema } from '#shared/schemas/directory'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'directory.write',
  body: newPhysicianSchema,
  handle: ({ context, body }) => addPhysician(context, body),
})
