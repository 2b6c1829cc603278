import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { askCautions } from '#server/services/ask-cautions'
import { idSchema } from '#shared/schemas/common'
import { cautionsAskedSchema } from '#shared/schemas/bench'
import { defineApiHandler } from '#server/utils/api-handler'

/** What the patient answered at the bench about a caution. */
export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema }),
  body: cautionsAskedSchema,
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: ({ context, params, body }) => askCautions(context, { id: params.id, ...body }),
})
