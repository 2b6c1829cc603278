import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { moveStudy } from '#server/services/move-study'
import { idSchema } from '#shared/schemas/common'
import { moveStudySchema } from '#shared/schemas/bench-day'
import { defineApiHandler } from '#server/utils/api-handler'

/** The values of a study that was begun under the wrong patient go to the referral of the right one. */
export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema }),
  body: moveStudySchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params, body }) => moveStudy(context, { id: params.id, ...body }),
})
