import { listSessions } from '#server/services/sessions'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'signed-in',
  duringEnrolment: true,
  handle: ({ event, context, user }) => listSessions(context, user.id, event.context.session!.idHash),
})
