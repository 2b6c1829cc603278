import { namesakesOf } from '#server/database/queries/patients'
import { namesakeQuerySchema } from '#shared/schemas/patient'
import { defineApiHandler } from '#server/utils/api-handler'

/** Possible same persons, before a new record is made. */
export default defineApiHandler({
  allow: 'patient.search',
  query: namesakeQuerySchema,
  handle: ({ context, query }) => namesakesOf(context.db, query),
})
