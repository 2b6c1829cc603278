import { importSet } from '#server/services/import-set'
import { ownSetImportSchema } from '#shared/schemas/own-set'
import { defineApiHandler } from '#server/utils/api-handler'

/** Checks a laboratory's own table, and stores it when `store` is set and nothing stops it. */
export default defineApiHandler({
  allow: 'shelf.propose',
  body: ownSetImportSchema,
  handle: ({ context, body }) => importSet(context, body),
})
