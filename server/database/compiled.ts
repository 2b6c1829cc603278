import type { CompiledQuery } from 'kysely'
import type { Database, Trx } from './connection'

/**
 * A query that runs at every request or thousands of times in a row: built and compiled once, then run with new values.
 * Building costs more than SQLite's own work on a row found by its key.
 * @param build the query with any values in place; the order of its parameters must be that of `parameters`
 * @example const byId = compiled(db => db.selectFrom('site').selectAll().where('id', '=', '').compile()); await byId(db, [id])
 */
export function compiled<R>(build: (db: Database | Trx) => CompiledQuery<R>): (db: Database | Trx, parameters: readonly unknown[]) => Promise<R[]> {
  let query: CompiledQuery<R> | undefined
  return async (db, parameters) => {
    query ??= build(db)
    if (parameters.length !== query.parameters.length) throw new Error('A compiled query got another number of values than it has places.')
    return (await db.executeQuery<R>({ ...query, parameters })).rows
  }
}
