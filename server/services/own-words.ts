import type { Database } from '#server/database/connection'

/** Words that a guesser who knows the house would try first: organisation, sites, towns, and the person's own names. */
export async function ownWords(db: Database, person: { name: string, email: string }): Promise<string[]> {
  const organisations = await db.selectFrom('organisation').select('name').execute()
  const sites = await db.selectFrom('site').select(['name', 'town']).execute()
  return [...organisations.map(row => row.name), ...sites.flatMap(row => [row.name, row.town]), person.name, person.email]
}
