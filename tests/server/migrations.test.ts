import { readdirSync } from 'node:fs'
import { sql } from 'kysely'
import { describe, expect, it } from 'vitest'
import { migrations } from '#migrations/index'
import { openDatabase } from '#server/database/connection'
import { migrateDatabase } from '#server/database/migrate'
import { testContext } from './helpers'

const t = await testContext()

describe('migrations', () => {
  it('are all listed in migrations/index.ts, in order', () => {
    const files = readdirSync('migrations').filter(file => file !== 'index.ts').map(file => file.replace(/\.ts$/, '')).sort()
    expect(Object.keys(migrations)).toEqual(files)
  })
  it('apply to an empty database, and a second time to nothing', async () => {
    const db = openDatabase(`${t.dataDir}/empty.sqlite`)
    expect(await migrateDatabase(db)).toEqual(Object.keys(migrations))
    expect(await migrateDatabase(db)).toEqual([])
    await db.destroy()
  })
  it('apply one by one to a database that was filled after the first of them, and lose nothing', async () => {
    const db = openDatabase(`${t.dataDir}/filled.sqlite`)
    const [first, ...rest] = Object.entries(migrations)
    await migrateDatabase(db, Object.fromEntries([first!]))
    await sql`insert into patient (id, record_number, family_name, given_name, birth_date, created_at) values ('p', 'P-000001', 'Invented', 'Person', '1974-03-14', '2026-12-02T09:00:00.000Z')`.execute(db)
    expect(await migrateDatabase(db)).toEqual(rest.map(([name]) => name))
    expect((await db.selectFrom('patient').select('familyName').execute())).toEqual([{ familyName: 'Invented' }])
    expect((await sql<{ integrityCheck: string }>`pragma integrity_check`.execute(db)).rows).toEqual([{ integrityCheck: 'ok' }])
    await db.destroy()
  })
  it('leave every own table STRICT', async () => {
    const { rows } = await sql<{ name: string, strict: number }>`select name, strict from pragma_table_list where schema = 'main' and type = 'table' and name not like 'sqlite_%' and name not like 'kysely_%' and name not like 'patient_search_%'`.execute(t.db)
    expect(rows.length).toBeGreaterThan(25)
    expect(rows.filter(row => row.strict !== 1)).toEqual([])
  })
})

describe('the connection', () => {
  it.each([['journal_mode', 'wal'], ['synchronous', 2], ['foreign_keys', 1], ['recursive_triggers', 1], ['busy_timeout', 10_000]])('%s is %s', async (pragma, value) => {
    const { rows } = await sql<Record<string, unknown>>`pragma ${sql.raw(pragma)}`.execute(t.db)
    expect(Object.values(rows[0]!)[0]).toBe(value)
  })
})
