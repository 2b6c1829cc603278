import * as z from 'zod'
import { siteOfReferral } from '#server/database/queries/referrals'
import { reassignReferral } from '#server/services/reassign-referral'
import { viewReferral } from '#server/services/view-referral'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'referral.triage',
  params: z.object({ id: idSchema }),
  body: z.object({ ownerId: idSchema.nullable() }),
  siteOf: (db, { params }) => siteOfReferral(db, params.id),
  handle: async ({ context, params, body }) => {
    await reassignReferral(context, { id: params.id, ...body })
    return viewReferral(context, params.id)
  },
})
