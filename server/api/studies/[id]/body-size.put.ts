import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { saveBodySize } from '#server/services/save-body-size'
import { idSchema } from '#shared/schemas/common'
import { bodySizeSchema } from '#shared/schemas/bench'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema }),
  body: bodySizeSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params, body }) => saveBodySize(context, { id: params.id, ...body }),
})
