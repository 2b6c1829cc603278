import { setResponseHeaders } from 'h3'
import * as z from 'zod'
import { siteOfUpload } from '#server/database/queries/referrals'
import { readUpload } from '#server/services/store-upload'
import { fileHeaders } from '#server/utils/file-headers'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

/** The bytes of a letter or picture: never run, never sniffed, in a sandbox of their own. */
export default defineApiHandler({
  allow: 'upload.read',
  params: z.object({ id: idSchema }),
  siteOf: (db, { params }) => siteOfUpload(db, params.id),
  handle: async ({ event, context, params }) => {
    const { bytes, mediaType, name } = await readUpload(context, params.id)
    setResponseHeaders(event, fileHeaders({ mediaType, name, byteCount: bytes.length }))
    return bytes
  },
})
