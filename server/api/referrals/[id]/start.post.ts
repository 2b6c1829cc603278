import * as z from 'zod'
import { siteOfReferral } from '#server/database/queries/referrals'
import { startStudy } from '#server/services/start-study'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema }),
  siteOf: (db, { params }) => siteOfReferral(db, params.id),
  handle: ({ context, params }) => startStudy(context, { referralId: params.id }),
})
