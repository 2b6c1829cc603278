import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { handOverStudy } from '#server/services/hand-over-study'
import { idSchema } from '#shared/schemas/common'
import { handOverSchema } from '#shared/schemas/bench'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.hand-over',
  params: z.object({ id: idSchema }),
  body: handOverSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: async ({ context, params, body }) => {
    await handOverStudy(context, { id: params.id, ...body })
    return { state: 'handed-over' }
  },
})
