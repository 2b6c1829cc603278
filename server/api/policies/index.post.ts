import { scopeSite } from '#server/database/queries/policies'
import { mayAt } from '#server/services/context'
import { proposePolicy } from '#server/services/policies'
import { DomainError } from '#shared/errors'
import { policyProposalSchema } from '#shared/schemas/policy'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'shelf.propose',
  body: policyProposalSchema,
  handle: async ({ context, body }) => {
    const siteId = scopeSite(body.name, body.siteId)
    if (siteId !== null && !mayAt(context.actor, 'shelf.propose', siteId)) throw new DomainError('not-found')
    return await proposePolicy(context, body)
  },
})
