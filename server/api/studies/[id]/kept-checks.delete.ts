import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { reopenCheck } from '#server/services/keep-check'
import { idSchema } from '#shared/schemas/common'
import { keepCheckSchema } from '#shared/schemas/bench'
import { defineApiHandler } from '#server/utils/api-handler'

/** The key holds slashes, so it stands in the query: ?key=… */
export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema }),
  query: keepCheckSchema.pick({ key: true }),
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: async ({ context, params, query }) => {
    await reopenCheck(context, { id: params.id, key: query.key })
    return { kept: false }
  },
})
