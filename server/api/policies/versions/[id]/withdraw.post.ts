import * as z from 'zod'
import { policyVersionById } from '#server/database/queries/policies'
import { mayAt } from '#server/services/context'
import { withdrawPolicy } from '#server/services/policies'
import { DomainError } from '#shared/errors'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'shelf.propose',
  params: z.object({ id: idSchema }),
  handle: async ({ context, params }) => {
    const found = await policyVersionById(context.db, params.id)
    if (!found || (found.siteId !== null && !mayAt(context.actor, 'shelf.propose', found.siteId))) throw new DomainError('not-found')
    await withdrawPolicy(context, params)
    return { id: params.id }
  },
})
