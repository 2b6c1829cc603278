import { sql } from 'kysely'
import { DomainError } from '#shared/errors'
import { defineApiHandler } from '#server/utils/api-handler'

/** For a supervisor: 200 while the database answers. Says nothing about versions or data. */
export default defineApiHandler({
  allow: 'public',
  handle: async ({ context }) => {
    const { rows } = await sql`select 1 as one`.execute(context.db)
    if (rows.length !== 1) throw new DomainError('unexpected')
    return { ok: true }
  },
})
