import { sql, type Kysely } from 'kysely'

/** Records that must be kept however old they are: a lawsuit, an inquiry. Lifted ones stay as history. */
const statements = [
  `CREATE TABLE legal_hold (
    id TEXT PRIMARY KEY, patient_id TEXT NOT NULL REFERENCES patient(id), reason TEXT NOT NULL CHECK (length(trim(reason)) > 2),
    set_by TEXT NOT NULL REFERENCES user(id), set_at TEXT NOT NULL, lifted_by TEXT REFERENCES user(id), lifted_at TEXT) STRICT`,
  `CREATE UNIQUE INDEX legal_hold_open ON legal_hold(patient_id) WHERE lifted_at IS NULL`,
]

export async function up(db: Kysely<unknown>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db)
}
