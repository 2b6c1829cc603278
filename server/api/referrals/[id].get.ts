import * as z from 'zod'
import { siteOfReferral } from '#server/database/queries/referrals'
import { viewReferral } from '#server/services/view-referral'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'referral.read',
  params: z.object({ id: idSchema }),
  siteOf: (db, { params }) => siteOfReferral(db, params.id),
  handle: ({ context, params }) => viewReferral(context, params.id),
})
