import { sql, type Kysely } from 'kysely'

/**
 * Referrals that a referring physician writes at the desk: the draft, its writer's alone until it is sent; and, for each
 * one that was sent, the record made for its patient and whether somebody of the clinic has said who that is.
 */
const statements = [
  `CREATE TABLE desk_draft (
    id TEXT PRIMARY KEY, user_id TEXT NOT NULL REFERENCES user(id), body_json TEXT NOT NULL, created_at TEXT NOT NULL, saved_at TEXT NOT NULL, revision INTEGER NOT NULL DEFAULT 1) STRICT`,
  `CREATE INDEX desk_draft_user ON desk_draft(user_id, saved_at)`,
  `CREATE TABLE desk_referral (
    referral_id TEXT PRIMARY KEY REFERENCES referral(id), patient_id TEXT NOT NULL UNIQUE REFERENCES patient(id), sent_by TEXT NOT NULL REFERENCES user(id), sent_at TEXT NOT NULL,
    identified_at TEXT, identified_by TEXT REFERENCES user(id), outcome TEXT CHECK (outcome IN ('new','known')), merge_id TEXT REFERENCES patient_merge(id),
    CHECK ((identified_at IS NULL) = (outcome IS NULL))) STRICT, WITHOUT ROWID`,
  `CREATE INDEX desk_referral_open ON desk_referral(referral_id) WHERE identified_at IS NULL`,
  `CREATE INDEX desk_referral_merge ON desk_referral(merge_id) WHERE merge_id IS NOT NULL`,
]

export async function up(db: Kysely<unknown>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db)
}
