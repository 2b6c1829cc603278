import { sql, type Kysely } from 'kysely'

/** Limits that a laboratory imported. A version is never altered: reports name it. */
const statements = [
  `CREATE TABLE own_set (
    set_id TEXT NOT NULL, version INTEGER NOT NULL, table_json TEXT NOT NULL, sha256 TEXT NOT NULL, imported_by TEXT NOT NULL REFERENCES user(id), imported_at TEXT NOT NULL,
    PRIMARY KEY (set_id, version)) STRICT`,
  `CREATE TRIGGER own_set_no_update BEFORE UPDATE ON own_set BEGIN SELECT RAISE(ABORT, 'An imported set is never altered.'); END`,
  `CREATE TRIGGER own_set_no_delete BEFORE DELETE ON own_set BEGIN SELECT RAISE(ABORT, 'An imported set is never removed.'); END`,
]

export async function up(db: Kysely<unknown>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db)
}
