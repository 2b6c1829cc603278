import { directoryNamesakes } from '#server/database/queries/directory'
import { organisationDay } from '#server/services/organisation-day'
import { directoryNamesakeQuerySchema } from '#shared/schemas/directory'
import { defineApiHandler } from '#server/utils/api-handler'

export default defineApiHandler({
  allow: 'directory.read',
  query: directoryNamesakeQuerySchema,
  handle: async ({ context, query }) => directoryNamesakes(context.db, { ...query, today: await organisationDay(context) }),
})
