import { getHeader } from 'h3'
import { changePassword } from '#server/services/change-password'
import { changePasswordSchema } from '#shared/schemas/user'
import { defineApiHandler } from '#server/utils/api-handler'
import { renewCookie } from '#server/utils/renew-cookie'

export default defineApiHandler({
  allow: 'signed-in',
  duringEnrolment: true,
  body: changePasswordSchema,
  handle: async ({ event, context, user, body }) => {
    const sessionId = await changePassword(context, { ...body, userId: user.id, sessionHash: event.context.session!.idHash, agent: getHeader(event, 'user-agent') ?? '' })
    await renewCookie(event, sessionId)
    return { done: true }
  },
})
