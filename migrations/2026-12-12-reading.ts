import { sql, type Kysely } from 'kysely'

/**
 * Absence and cover, who is in training, everybody who wrote a draft, and records opened in an emergency.
 * A person in training writes and does not sign. A draft that a supervisor went over keeps the name of who began it.
 */
const statements = [
  `CREATE TABLE absence (
    id TEXT PRIMARY KEY, user_id TEXT NOT NULL REFERENCES user(id), from_day TEXT NOT NULL, to_day TEXT NOT NULL CHECK (to_day >= from_day),
    covered_by TEXT NOT NULL REFERENCES user(id), created_at TEXT NOT NULL, created_by TEXT NOT NULL REFERENCES user(id), cancelled_at TEXT, CHECK (covered_by <> user_id)) STRICT`,
  `CREATE INDEX absence_user ON absence(user_id, to_day)`,
  `CREATE INDEX absence_cover ON absence(covered_by, to_day)`,
  `ALTER TABLE user ADD COLUMN in_training INTEGER NOT NULL DEFAULT 0`,
  `CREATE TABLE report_writer (
    report_id TEXT NOT NULL REFERENCES report(id), user_id TEXT NOT NULL REFERENCES user(id), first_at TEXT NOT NULL, PRIMARY KEY (report_id, user_id)) STRICT, WITHOUT ROWID`,
  `INSERT INTO report_writer (report_id, user_id, first_at) SELECT id, drafted_by, drafted_at FROM report WHERE drafted_by IS NOT NULL`,
  `CREATE TABLE emergency_access (
    id TEXT PRIMARY KEY, user_id TEXT NOT NULL REFERENCES user(id), study_id TEXT NOT NULL REFERENCES study(id), site_id TEXT NOT NULL REFERENCES site(id),
    reason TEXT NOT NULL CHECK (length(trim(reason)) >= 10), opened_at TEXT NOT NULL, expires_at TEXT NOT NULL CHECK (expires_at > opened_at)) STRICT`,
  `CREATE INDEX emergency_access_user ON emergency_access(user_id, expires_at)`,
]

export async function up(db: Kysely<unknown>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db)
}
