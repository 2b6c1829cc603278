import { Migrator, type Kysely, type Migration } from 'kysely'
import { migrations } from '#migrations/index'

/**
 * Applies what is missing, in order. The list is a static import: a built server has no folder of migrations to read.
 * @returns the names of the migrations applied now
 * @throws the first error; what had been applied before it stays
 */
export async function migrateDatabase<T>(db: Kysely<T>, list: Record<string, Migration> = migrations): Promise<string[]> {
  const migrator = new Migrator({ db, provider: { getMigrations: async () => list } })
  const { error, results } = await migrator.migrateToLatest()
  if (error) throw error instanceof Error ? error : new Error(String(error))
  return (results ?? []).map(result => result.migrationName)
}
