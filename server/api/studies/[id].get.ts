import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { viewStudy } from '#server/services/view-study'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.read',
  params: z.object({ id: idSchema }),
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params }) => viewStudy(context, params.id),
})
