import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { confirmStudy } from '#server/services/confirm-study'
import { idSchema } from '#shared/schemas/common'
import { confirmSchema } from '#shared/schemas/bench'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema }),
  body: confirmSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params, body }) => confirmStudy(context, { id: params.id, ...body }),
})
