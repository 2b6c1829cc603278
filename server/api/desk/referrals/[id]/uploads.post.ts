import * as z from 'zod'
import { UPLOAD_LIMIT_BYTES } from '#server/services/check-upload'
import { addRequestFile, viewRequest } from '#server/services/desk-requests'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'
import { readSentFile } from '#server/utils/read-multipart'

/** One file of a multipart form; whose referral it is is known before the body is read. */
export default defineApiHandler({
  allow: 'desk.refer',
  params: z.object({ id: idSchema }),
  handle: async ({ event, context, params }) => {
    await viewRequest(context, params.id)
    return addRequestFile(context, { id: params.id, ...await readSentFile(event, UPLOAD_LIMIT_BYTES) })
  },
})
