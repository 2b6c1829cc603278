import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { saveDraft } from '#server/services/save-draft'
import { saveDraftSchema } from '#shared/schemas/report'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'report.write',
  params: z.object({ id: idSchema }),
  body: saveDraftSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params, body }) => saveDraft(context, { studyId: params.id, ...body }),
})
