import * as z from 'zod'
import { viewPolicy } from '#server/services/view-policy'
import { policyNameSchema, policyQuerySchema } from '#shared/schemas/policy'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'shelf.read',
  params: z.object({ name: policyNameSchema }),
  query: policyQuerySchema,
  handle: ({ context, params, query, sites }) => viewPolicy(context, { name: params.name, siteId: query.siteId ?? null, sites }),
})
