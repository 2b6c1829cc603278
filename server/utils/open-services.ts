import { existsSync } from 'node:fs'
import { join, resolve } from 'node:path'
import { openDatabase, type Database } from '#server/database/connection'
import { migrateDatabase } from '#server/database/migrate'
import type { Log, Settings } from '#server/services/context'
import { loadKeys, type Keys } from '#server/services/keys'
import type { Services } from './services'

const KEY_CHECK = 'key-check'

/**
 * Opens keys and database and brings the tables up to date.
 * @throws when the key file is missing beside an existing database, or is not the one the database was made with
 */
export async function openServices(settings: Settings, keyFile: string, log: Log, clock: () => Date = () => new Date()): Promise<Services> {
  const dataDir = resolve(settings.dataDir)
  const file = join(dataDir, 'orthodrome.sqlite')
  const keys = loadKeys(keyFile ? resolve(keyFile) : `${dataDir}.key`, !existsSync(file))
  const db = openDatabase(file)
  const applied = await migrateDatabase(db)
  await checkKey(db, keys)
  if (applied.length > 0) log.info({ applied }, 'The database was brought up to date')
  return { db, keys, clock, settings: { ...settings, dataDir }, log }
}

async function checkKey(db: Database, keys: Keys): Promise<void> {
  const value = keys.auditMac(KEY_CHECK)
  const stored = await db.selectFrom('meta').select('value').where('key', '=', KEY_CHECK).executeTakeFirst()
  if (!stored) await db.insertInto('meta').values({ key: KEY_CHECK, value }).execute()
  else if (stored.value !== value) throw new Error('The key file is not the one this database was made with. Restore the right one.')
}
