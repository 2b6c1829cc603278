import { checkRows } from '#server/services/adopt-set'
import { rowChecksSchema } from '#shared/schemas/shelf'
import { defineApiHandler } from '#server/utils/api-handler'

/** "Compared with the paper": by whoever answers for limits. */
export default defineApiHandler({
  allow: 'shelf.approve',
  body: rowChecksSchema,
  handle: async ({ context, body }) => {
    await checkRows(context, body)
    return { checked: body.rowIds.length }
  },
})
