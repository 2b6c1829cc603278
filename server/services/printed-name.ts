import type { Database } from '#server/database/connection'

/** A person as reports print them, with credentials; '' for nobody. */
export async function printedNameOf(db: Database, userId: string | null): Promise<string> {
  if (userId === null) return ''
  const user = await db.selectFrom('user').select(['name', 'printedName', 'credentials']).where('id', '=', userId).executeTakeFirst()
  return user ? [user.printedName || user.name, user.credentials].filter(Boolean).join(', ') : ''
}
