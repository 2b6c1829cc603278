import { searchPhysicians } from '#server/database/queries/directory'
import { organisationDay } from '#server/services/organisation-day'
import { physicianSearchSchema } from '#shared/schemas/directory'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'directory.read',
  query: physicianSearchSchema,
  handle: async ({ context, query }) => searchPhysicians(context.db, { ...query, today: await organisationDay(context) }),
})
