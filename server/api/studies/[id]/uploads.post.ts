import * as z from 'zod'
import { siteOfStudy } from '#server/database/queries/studies'
import { UPLOAD_LIMIT_BYTES } from '#server/services/check-upload'
import { storeUpload } from '#server/services/store-upload'
import { readSentFile } from '#server/utils/read-multipart'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

/** A photograph or print of the traces. One file of a multipart form; the body is read only after the permission was checked. */
export default defineApiHandler({
  allow: 'study.record',
  params: z.object({ id: idSchema }),
  siteOf: (db, { params }) => siteOfStudy(db, params.id),
  handle: async ({ event, context, params }) => storeUpload(context, { studyId: params.id, ...await readSentFile(event, UPLOAD_LIMIT_BYTES) }),
})
