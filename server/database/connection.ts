import { chmodSync, mkdirSync } from 'node:fs'
import { dirname } from 'node:path'
import Sqlite from 'better-sqlite3'
import { CamelCasePlugin, CompiledQuery, Kysely, SqliteDialect, SqliteDriver, type DatabaseConnection, type Driver, type SqliteDialectConfig, type Transaction } from 'kysely'
import type { Tables } from './tables/index'

export type Database = Kysely<Tables>
export type Trx = Transaction<Tables>

/**
 * Takes the write lock when a transaction starts: a deferred transaction that reads first and writes later fails at
 * once ("database is locked", whatever the time-out says) when a script beside the server wrote in between.
 */
class ImmediateDriver extends SqliteDriver {
  override async beginTransaction(connection: DatabaseConnection): Promise<void> {
    await connection.executeQuery(CompiledQuery.raw('begin immediate'))
  }
}
class ImmediateDialect extends SqliteDialect {
  constructor(private readonly settings: SqliteDialectConfig) { super(settings) }

  override createDriver(): Driver { return new ImmediateDriver(this.settings) }
}

/** `synchronous = FULL`: an acknowledged write survives a power cut. `recursive_triggers`: INSERT OR REPLACE cannot slip past the triggers that refuse change. */
const pragmas = ['journal_mode = WAL', 'synchronous = FULL', 'foreign_keys = ON', 'recursive_triggers = ON', 'busy_timeout = 10000', 'temp_store = MEMORY', 'cache_size = -65536']

/**
 * Opens the one connection that writes. Queries of one process wait for one another, so nothing slow (hashing, PDF,
 * mail) belongs inside a transaction, and a service inside one uses `trx` only: `context.db` would wait for ever.
 */
export function openDatabase(file: string): Database {
  mkdirSync(dirname(file), { recursive: true, mode: 0o700 })
  const sqlite = new Sqlite(file)
  chmodSync(file, 0o600)
  for (const pragma of pragmas) sqlite.pragma(pragma)
  return new Kysely<Tables>({ dialect: new ImmediateDialect({ database: sqlite }), plugins: [new CamelCasePlugin()] })
}

/** A second connection for long reads; it can write nothing. */
export function openReadOnly(file: string): Database {
  const sqlite = new Sqlite(file, { readonly: true, fileMustExist: true })
  sqlite.pragma('busy_timeout = 10000')
  return new Kysely<Tables>({ dialect: new SqliteDialect({ database: sqlite }), plugins: [new CamelCasePlugin()] })
}
