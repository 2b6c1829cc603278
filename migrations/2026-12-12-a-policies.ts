import { sql, type Kysely } from 'kysely'

/** Rules of the organisation, each version proposed by one person and approved by another. site_id is null for a rule of the organisation. */
const statements = [
  `CREATE TABLE policy_version (
    id TEXT PRIMARY KEY, name TEXT NOT NULL, site_id TEXT REFERENCES site(id), version INTEGER NOT NULL, body_json TEXT NOT NULL, note TEXT NOT NULL DEFAULT '',
    proposed_by TEXT NOT NULL REFERENCES user(id), proposed_at TEXT NOT NULL, approved_by TEXT REFERENCES user(id), approved_at TEXT, effective_on TEXT NOT NULL,
    withdrawn_at TEXT, withdrawn_by TEXT REFERENCES user(id), CHECK (approved_by IS NULL OR approved_by <> proposed_by)) STRICT`,
  `CREATE UNIQUE INDEX policy_version_number ON policy_version(name, coalesce(site_id, ''), version)`,
  // What was approved is never altered: studies name the version they were judged by.
  `CREATE TRIGGER policy_version_no_update BEFORE UPDATE ON policy_version WHEN old.approved_at IS NOT NULL BEGIN SELECT RAISE(ABORT, 'An approved policy is never altered.'); END`,
  `CREATE TRIGGER policy_version_no_delete BEFORE DELETE ON policy_version BEGIN SELECT RAISE(ABORT, 'A policy is never removed.'); END`,
]

export async function up(db: Kysely<unknown>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db)
}
