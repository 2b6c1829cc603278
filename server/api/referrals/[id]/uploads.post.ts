import * as z from 'zod'
import { siteOfReferral } from '#server/database/queries/referrals'
import { UPLOAD_LIMIT_BYTES } from '#server/services/check-upload'
import { storeUpload } from '#server/services/store-upload'
import { readSentFile } from '#server/utils/read-multipart'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

/** One file of a multipart form; the body is read only after the permission was checked. */
export default defineApiHandler({
  allow: 'upload.write',
  params: z.object({ id: idSchema }),
  siteOf: (db, { params }) => siteOfReferral(db, params.id),
  handle: async ({ event, context, params }) => storeUpload(context, { referralId: params.id, ...await readSentFile(event, UPLOAD_LIMIT_BYTES) }),
})
