import { searchPhysicians } from '#server/database/queries/directory'
import { physicianSearchSchema } from '#shared/schemas/directory'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'directory.read',
  query: physicianSearchSchema,
  handle: ({ context, query }) => searchPhysicians(context.db, { ...query, today: context.clock().toISOString().slice(0, 10) }),
})
