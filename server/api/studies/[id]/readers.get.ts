import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { possibleReaders } from '#server/services/take-study'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

/** Who may read this study. */
export default defineApiHandler({
  allow: 'study.assign',
  params: z.object({ id: idSchema }),
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params }) => possibleReaders(context, params.id),
})
