import * as z from 'zod'
import { siteOfUpload } from '#server/database/queries/referrals'
import { removeUpload } from '#server/services/store-upload'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'upload.write',
  params: z.object({ id: idSchema }),
  siteOf: (db, { params }) => siteOfUpload(db, params.id),
  handle: async ({ context, params }) => {
    await removeUpload(context, params.id)
    return { removed: true }
  },
})
