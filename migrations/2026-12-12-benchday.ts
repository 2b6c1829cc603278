import { sql, type Kysely } from 'kysely'

/**
 * What stands around a study at the bench: equipment of a site, circumstances of the day, comments, further visits, later
 * entry from a downtime sheet, what links a study to another record, and the protocol that laid it out.
 */
const statements = [
  `CREATE TABLE equipment (
    id TEXT PRIMARY KEY, site_id TEXT NOT NULL REFERENCES site(id), name TEXT NOT NULL, serial TEXT NOT NULL DEFAULT '', kind TEXT NOT NULL,
    calibration_due TEXT, safety_due TEXT, retired_at TEXT, created_at TEXT NOT NULL, created_by TEXT REFERENCES user(id), revision INTEGER NOT NULL DEFAULT 1) STRICT`,
  `CREATE INDEX equipment_site ON equipment(site_id)`,
  `CREATE TABLE study_circumstances (
    study_id TEXT PRIMARY KEY REFERENCES study(id), room TEXT NOT NULL DEFAULT '', supervision TEXT CHECK (supervision IN ('in-room','in-suite','live-video','general')),
    supervisor_id TEXT REFERENCES user(id), tolerance TEXT CHECK (tolerance IN ('well','with-discomfort','poorly','ended-early')),
    tolerance_note TEXT NOT NULL DEFAULT '', told TEXT NOT NULL DEFAULT '', revision INTEGER NOT NULL DEFAULT 1) STRICT, WITHOUT ROWID`,
  `CREATE TABLE study_equipment (
    study_id TEXT NOT NULL REFERENCES study(id), equipment_id TEXT NOT NULL REFERENCES equipment(id), PRIMARY KEY (study_id, equipment_id)) STRICT, WITHOUT ROWID`,
  `CREATE TABLE study_comment (
    id TEXT PRIMARY KEY, study_id TEXT NOT NULL REFERENCES study(id), run_id TEXT REFERENCES study_run(id), text TEXT NOT NULL, at TEXT NOT NULL, by_user_id TEXT NOT NULL REFERENCES user(id)) STRICT`,
  `CREATE INDEX study_comment_study ON study_comment(study_id, at)`,
  `CREATE TABLE study_visit (
    id TEXT PRIMARY KEY, study_id TEXT NOT NULL REFERENCES study(id), day TEXT NOT NULL, started_at TEXT NOT NULL, reason TEXT NOT NULL, technologist_id TEXT REFERENCES user(id), confirmation_json TEXT NOT NULL) STRICT`,
  `CREATE INDEX study_visit_study ON study_visit(study_id, started_at)`,
  `CREATE TABLE study_later_entry (
    study_id TEXT PRIMARY KEY REFERENCES study(id), measured_at TEXT NOT NULL, measured_by TEXT NOT NULL, reason TEXT NOT NULL, entered_at TEXT NOT NULL, entered_by TEXT NOT NULL REFERENCES user(id)) STRICT, WITHOUT ROWID`,
  `CREATE TABLE study_move (
    from_study_id TEXT PRIMARY KEY REFERENCES study(id), to_study_id TEXT NOT NULL UNIQUE REFERENCES study(id), reason TEXT NOT NULL, at TEXT NOT NULL, by_user_id TEXT NOT NULL REFERENCES user(id),
    checked_at TEXT, checked_by TEXT REFERENCES user(id)) STRICT, WITHOUT ROWID`,
  `CREATE TABLE study_protocol (
    study_id TEXT PRIMARY KEY REFERENCES study(id), protocol_id TEXT NOT NULL, label TEXT NOT NULL, version INTEGER NOT NULL, body_json TEXT NOT NULL) STRICT, WITHOUT ROWID`,
  `CREATE INDEX upload_study ON upload(study_id)`,
]

export async function up(db: Kysely<unknown>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db)
}
