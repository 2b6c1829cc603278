import { sql, type Kysely } from 'kysely'

/** Two records of one person put together, in a way that can be undone; studies that were made elsewhere. */
const statements = [
  `CREATE TABLE patient_merge (
    id TEXT PRIMARY KEY, kept_id TEXT NOT NULL REFERENCES patient(id), merged_id TEXT NOT NULL REFERENCES patient(id), moved_json TEXT NOT NULL, reason TEXT NOT NULL,
    merged_at TEXT NOT NULL, merged_by TEXT NOT NULL REFERENCES user(id), undone_at TEXT, undone_by TEXT REFERENCES user(id), undo_reason TEXT NOT NULL DEFAULT '', CHECK (kept_id <> merged_id)) STRICT`,
  `CREATE INDEX patient_merge_kept ON patient_merge(kept_id)`,
  `CREATE UNIQUE INDEX patient_merge_standing ON patient_merge(merged_id) WHERE undone_at IS NULL`,
  `CREATE TABLE outside_study (
    id TEXT PRIMARY KEY, patient_id TEXT NOT NULL REFERENCES patient(id), performed_on TEXT NOT NULL, place TEXT NOT NULL, summary TEXT NOT NULL, values_json TEXT NOT NULL, upload_id TEXT REFERENCES upload(id),
    entered_at TEXT NOT NULL, entered_by TEXT NOT NULL REFERENCES user(id), removed_at TEXT) STRICT`,
  `CREATE INDEX outside_study_patient ON outside_study(patient_id)`,
]

export async function up(db: Kysely<unknown>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db)
}
