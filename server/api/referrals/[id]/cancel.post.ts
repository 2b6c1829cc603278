import * as z from 'zod'
import { siteOfReferral } from '#server/database/queries/referrals'
import { cancelReferral } from '#server/services/move-referral'
import { viewReferral } from '#server/services/view-referral'
import { idSchema } from '#shared/schemas/common'
import { reasonSchema } from '#shared/schemas/referral'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'referral.write',
  params: z.object({ id: idSchema }),
  body: reasonSchema,
  siteOf: (db, { params }) => siteOfReferral(db, params.id),
  handle: async ({ context, params, body }) => {
    await cancelReferral(context, { id: params.id, ...body })
    return viewReferral(context, params.id)
  },
})
