import * as z from 'zod'
import { listViews } from '#server/services/list-views'
import { viewRooms } from '#shared/schemas/list-view'
import { defineApiHandler } from '#server/utils/api-handler'

/** One's own saved views of a list. */
export default defineApiHandler({
  allow: 'referral.read',
  query: z.object({ room: z.enum(viewRooms) }),
  handle: ({ context, query }) => listViews(context, query.room),
})
