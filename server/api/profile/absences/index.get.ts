import { viewAbsences } from '#server/services/view-absences'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'signed-in',
  handle: ({ context, user }) => viewAbsences(context, user.id),
})
