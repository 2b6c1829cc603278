import * as z from 'zod'
import { siteOfReferral } from '#server/database/queries/referrals'
import { identifyPatient } from '#server/services/identify-patient'
import { idSchema } from '#shared/schemas/common'
import { identifySchema } from '#shared/schemas/referral'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'patient.merge',
  params: z.object({ id: idSchema }),
  body: identifySchema,
  siteOf: (db, { params }) => siteOfReferral(db, params.id),
  handle: async ({ context, params, body }) => {
    await identifyPatient(context, { referralId: params.id, ...body })
    return { done: true }
  },
})
