import * as z from 'zod'
import { siteOfReferral } from '#server/database/queries/referrals'
import { bookReferral } from '#server/services/book-referral'
import { viewReferral } from '#server/services/view-referral'
import { idSchema } from '#shared/schemas/common'
import { bookingSchema } from '#shared/schemas/referral'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'referral.book',
  params: z.object({ id: idSchema }),
  body: bookingSchema,
  siteOf: (db, { params }) => siteOfReferral(db, params.id),
  handle: async ({ context, params, body }) => {
    await bookReferral(context, { id: params.id, ...body })
    return viewReferral(context, params.id)
  },
})
