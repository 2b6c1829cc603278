import * as z from 'zod'
import { siteOfReferral } from '#server/database/queries/referrals'
import { undoArrival } from '#server/services/start-study'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema }),
  siteOf: (db, { params }) => siteOfReferral(db, params.id),
  handle: async ({ context, params }) => {
    await undoArrival(context, { referralId: params.id })
    return { arrived: false }
  },
})
