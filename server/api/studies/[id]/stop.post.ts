import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { stopStudy } from '#server/services/hand-over-study'
import { idSchema } from '#shared/schemas/common'
import { reasonSchema } from '#shared/schemas/referral'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema }),
  body: reasonSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: async ({ context, params, body }) => {
    await stopStudy(context, { id: params.id, ...body })
    return { state: 'stopped' }
  },
})
