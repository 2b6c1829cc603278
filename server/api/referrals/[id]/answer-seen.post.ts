import * as z from 'zod'
import { siteOfReferral } from '#server/database/queries/referrals'
import { noteAnswerSeen } from '#server/services/letters'
import { viewReferral } from '#server/services/view-referral'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'referral.triage',
  params: z.object({ id: idSchema }),
  siteOf: (db, { params }) => siteOfReferral(db, params.id),
  handle: async ({ context, params }) => {
    await noteAnswerSeen(context, { id: params.id })
    return viewReferral(context, params.id)
  },
})
