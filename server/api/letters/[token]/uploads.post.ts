import { getRequestHeader } from 'h3'
import * as z from 'zod'
import { addLetterFile, checkPass } from '#server/services/answer-letter'
import { UPLOAD_LIMIT_BYTES } from '#server/services/check-upload'
import { readSentFile } from '#server/utils/read-multipart'
import { defineApiHandler } from '#server/utils/api-handler'
import { clientAddress } from '#server/utils/auth'

/** One file of a multipart form; the pass that the birth date gave stands in a header, so that it is known before the body is read. */
export default defineApiHandler({
  allow: 'public',
  params: z.object({ token: z.string().min(20).max(100) }),
  handle: async ({ event, context, params }) => {
    const call = { token: params.token, pass: getRequestHeader(event, 'x-letter-pass') ?? '' }
    checkPass(context, call)
    return addLetterFile(context, { ...call, address: clientAddress(event), ...await readSentFile(event, UPLOAD_LIMIT_BYTES) })
  },
})
