import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { enterStudyInError } from '#server/services/move-study'
import { idSchema } from '#shared/schemas/common'
import { studyErrorSchema } from '#shared/schemas/bench-day'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema }),
  body: studyErrorSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: async ({ context, params, body }) => {
    await enterStudyInError(context, { id: params.id, ...body })
    return { state: 'entered-in-error' }
  },
})
