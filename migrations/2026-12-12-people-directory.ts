import { sql, type Kysely } from 'kysely'

/** Who of a practice, besides its physicians, is told the passphrase; to whom it was handed; entries that turned out to be one person. */
const statements = [
  `CREATE TABLE practice_delegate (
    id TEXT PRIMARY KEY, practice_id TEXT NOT NULL REFERENCES practice(id), name TEXT NOT NULL, duty TEXT NOT NULL DEFAULT '', phone TEXT NOT NULL DEFAULT '',
    created_at TEXT NOT NULL, created_by TEXT NOT NULL REFERENCES user(id), ended_at TEXT, ended_by TEXT REFERENCES user(id)) STRICT`,
  `CREATE INDEX practice_delegate_practice ON practice_delegate(practice_id)`,
  `ALTER TABLE practice ADD COLUMN passphrase_handed_over_to TEXT NOT NULL DEFAULT ''`,
  `ALTER TABLE physician ADD COLUMN merged_into TEXT REFERENCES physician(id)`,
]

export async function up(db: Kysely<unknown>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db)
}
