import { DomainError } from '#shared/errors'
import { defineApiHandler } from '#server/utils/api-handler'

/** An address that no route answers: the same shape as every other error, and no page rendered for it. */
export default defineApiHandler({
  allow: 'signed-in',
  duringEnrolment: true,
  handle: () => {
    throw new DomainError('not-found')
  },
})
