import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { checkMovedValues } from '#server/services/move-study'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema }),
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: async ({ context, params }) => {
    await checkMovedValues(context, { id: params.id })
    return { checked: true }
  },
})
