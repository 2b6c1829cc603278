import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { keepCheck } from '#server/services/keep-check'
import { idSchema } from '#shared/schemas/common'
import { keepCheckSchema } from '#shared/schemas/bench'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema }),
  body: keepCheckSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: async ({ context, params, body }) => {
    await keepCheck(context, { id: params.id, ...body })
    return { kept: true }
  },
})
