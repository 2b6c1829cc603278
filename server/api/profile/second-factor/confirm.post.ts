import { getHeader } from 'h3'
import { confirmSecondFactor } from '#server/services/second-factor'
import { totpEnrolSchema } from '#shared/schemas/user'
import { defineApiHandler } from '#server/utils/api-handler'
import { renewCookie } from '#server/utils/renew-cookie'

/** Answers with the recovery codes, this once. */
export default defineApiHandler({
  allow: 'signed-in',
  duringEnrolment: true,
  body: totpEnrolSchema,
  handle: async ({ event, context, user, body }) => {
    const { recoveryCodes, sessionId } = await confirmSecondFactor(context, { ...body, userId: user.id, agent: getHeader(event, 'user-agent') ?? '' })
    await renewCookie(event, sessionId)
    return { recoveryCodes }
  },
})
