import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { noteLaterEntry } from '#server/services/continue-study'
import { idSchema } from '#shared/schemas/common'
import { laterEntrySchema } from '#shared/schemas/bench-day'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema }),
  body: laterEntrySchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params, body }) => noteLaterEntry(context, { id: params.id, ...body }),
})
