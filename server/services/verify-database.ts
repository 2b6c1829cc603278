import { sql } from 'kysely'
import type { Database } from '#server/database/connection'

/** What must never change, each guarded by two triggers. */
const guarded = ['report_version', 'report_pdf', 'audit_event', 'view_event']
const guards = guarded.flatMap(table => [`${table}_no_update`, `${table}_no_delete`])
const MOST_PROBLEMS = 20

/**
 * The file itself: SQLite's own check of its pages and indexes, every foreign key, and the triggers that refuse changes
 * to signed versions, PDFs, audit trail and views. Reads every page: slow for a large file. Writes nothing.
 * @returns a sentence for each fault; [] when there is none
 */
export async function verifyDatabase(db: Database): Promise<string[]> {
  return [...await brokenPages(db), ...await brokenKeys(db), ...await missingGuards(db)]
}

async function brokenPages(db: Database): Promise<string[]> {
  const { rows } = await sql<{ integrityCheck: string }>`pragma integrity_check(${sql.lit(MOST_PROBLEMS)})`.execute(db)
  return rows.map(row => row.integrityCheck).filter(words => words !== 'ok').map(words => `The file is damaged: ${words}.`)
}

async function brokenKeys(db: Database): Promise<string[]> {
  const { rows } = await sql<{ table: string, parent: string, n: number }>`select "table", parent, count(*) as n from pragma_foreign_key_check group by 1, 2`.execute(db)
  return rows.map(({ table, parent, n }) => `${n === 1 ? 'One row' : `${n} rows`} of ${table} ${n === 1 ? 'points' : 'point'} to a ${parent} that does not exist.`)
}

/** A trigger of the right name that refuses nothing is no guard. */
async function missingGuards(db: Database): Promise<string[]> {
  const { rows } = await sql<{ name: string }>`select name from sqlite_master where type = 'trigger' and sql like '%RAISE(ABORT%'`.execute(db)
  const there = new Set(rows.map(row => row.name))
  return guards.filter(name => !there.has(name)).map(name => `The guard ${name} was taken away: what it protects could be changed.`)
}
