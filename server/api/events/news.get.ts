import * as z from 'zod'
import { hearChanges } from '#server/services/hear-changes'
import { defineApiHandler } from '#server/utils/api-handler'

/** The same as the stream, asked for: where a stream cannot be held open. */
export default defineApiHandler({
  allow: 'changes.hear',
  query: z.object({ after: z.coerce.number().int().min(0).optional() }),
  handle: ({ context, query }) => hearChanges(context, query.after ?? null),
})
