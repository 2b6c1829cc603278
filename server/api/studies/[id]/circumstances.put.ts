import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { saveCircumstances } from '#server/services/save-circumstances'
import { idSchema } from '#shared/schemas/common'
import { circumstancesSchema } from '#shared/schemas/bench-day'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema }),
  body: circumstancesSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params, body }) => saveCircumstances(context, { id: params.id, ...body }),
})
