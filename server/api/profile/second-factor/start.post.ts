import { startSecondFactor } from '#server/services/second-factor'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'signed-in',
  duringEnrolment: true,
  handle: ({ context, user }) => startSecondFactor(context, user),
})
