import { sql } from 'kysely'
import { newToken } from './keys'
import { now, type ServiceContext } from './context'

export const FIRST_RUN = 'first-run'
const DAY_MS = 86_400_000

/**
 * Makes the one-time link of the first administrator; each start replaces the one before. Only its hash is stored.
 * @returns the address to print on the console, or null as soon as one person exists, and in the demonstration
 */
export async function writeFirstRunLink(context: ServiceContext): Promise<string | null> {
  if (context.settings.demonstration || !await nobodyExists(context)) return null
  const token = newToken()
  await context.db.transaction().execute(async (trx) => {
    await trx.deleteFrom('oneTimeLink').where('purpose', '=', FIRST_RUN).execute()
    await trx.insertInto('oneTimeLink').values({
      tokenHash: context.keys.tokenHash(token), purpose: FIRST_RUN, userId: null, createdAt: now(context),
      expiresAt: new Date(context.clock().getTime() + DAY_MS).toISOString(), usedAt: null,
    }).execute()
  })
  // After #: browsers send that part to no server, so that no proxy's log can hold the token.
  return `${new URL(context.settings.appOrigin).origin}/first-run#${token}`
}

export async function nobodyExists(context: Pick<ServiceContext, 'db'>): Promise<boolean> {
  const { rows } = await sql`select 1 from user limit 1`.execute(context.db)
  return rows.length === 0
}
