import { sql, type Kysely } from 'kysely'

/** Questions of the bench to the readers, kept with the study; what stands in them stays, only their state moves on. */
const statements = [
  `CREATE TABLE study_question (
    id TEXT PRIMARY KEY, study_id TEXT NOT NULL REFERENCES study(id), site_id TEXT NOT NULL REFERENCES site(id), run_id TEXT REFERENCES study_run(id),
    question TEXT NOT NULL, asked_by TEXT NOT NULL REFERENCES user(id), asked_at TEXT NOT NULL,
    state TEXT NOT NULL CHECK (state IN ('open','answered','withdrawn')), seen_by TEXT REFERENCES user(id), seen_at TEXT,
    answer TEXT NOT NULL DEFAULT '', added_run_id TEXT REFERENCES study_run(id), closed_by TEXT REFERENCES user(id), closed_at TEXT, overdue_at TEXT) STRICT`,
  `CREATE INDEX study_question_study ON study_question(study_id)`,
  `CREATE INDEX study_question_open ON study_question(site_id, asked_at) WHERE state = 'open'`,
]

export async function up(db: Kysely<unknown>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db)
}
