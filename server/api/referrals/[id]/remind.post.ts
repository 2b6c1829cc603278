import * as z from 'zod'
import { siteOfReferral } from '#server/database/queries/referrals'
import { remind } from '#server/services/move-referral'
import { viewReferral } from '#server/services/view-referral'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'referral.write',
  params: z.object({ id: idSchema }),
  siteOf: (db, { params }) => siteOfReferral(db, params.id),
  handle: async ({ context, params }) => {
    await remind(context, { id: params.id })
    return viewReferral(context, params.id)
  },
})
