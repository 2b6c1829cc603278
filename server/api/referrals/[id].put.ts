import * as z from 'zod'
import { siteOfReferral } from '#server/database/queries/referrals'
import { changeReferral } from '#server/services/save-referral'
import { viewReferral } from '#server/services/view-referral'
import { idSchema } from '#shared/schemas/common'
import { referralSchema } from '#shared/schemas/referral'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'referral.write',
  params: z.object({ id: idSchema }),
  body: referralSchema.extend({ revision: z.number().int().min(1) }),
  siteOf: (db, { params }) => siteOfReferral(db, params.id),
  handle: async ({ context, params, body: { revision, ...input } }) => {
    await changeReferral(context, { id: params.id, revision, input })
    return viewReferral(context, params.id)
  },
})
