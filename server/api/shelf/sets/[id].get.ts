import * as z from 'zod'
import { viewSet } from '#server/services/view-shelf'
import { idSchema } from '#shared/schemas/common'
import { defineApiHandler } from '#server/utils/api-handler'

/** One set, shipped or imported, with the rows that were compared with the paper; `?version=` for an older one. */
export default defineApiHandler({
  allow: 'shelf.read',
  params: z.object({ id: idSchema }),
  query: z.object({ version: z.coerce.number().int().min(1).optional() }),
  handle: ({ context, params, query }) => viewSet(context, { id: params.id, version: query.version }),
})
