import { sql, type Kysely } from 'kysely'

/**
 * Whether an account's address was proved by a mail, and by whom the account was made; roles that wait for a second
 * person. Accounts that exist already prove their address once, on the profile, before they act as the second of two.
 */
const statements = [
  `ALTER TABLE user ADD COLUMN email_confirmed_at TEXT`,
  `ALTER TABLE user ADD COLUMN created_by TEXT REFERENCES user(id)`,
  `CREATE TABLE role_proposal (
    id TEXT PRIMARY KEY, user_id TEXT NOT NULL REFERENCES user(id), site_id TEXT NOT NULL REFERENCES site(id),
    role TEXT NOT NULL CHECK (role IN ('technologist','neurologist','administrator','medical-director','referring-physician')),
    starts_on TEXT NOT NULL, ends_on TEXT, proposed_by TEXT NOT NULL REFERENCES user(id), proposed_at TEXT NOT NULL,
    decided_by TEXT REFERENCES user(id), decided_at TEXT, outcome TEXT CHECK (outcome IN ('approved','approved-alone','declined')),
    CHECK (outcome IS NULL OR outcome <> 'approved' OR (decided_by <> proposed_by AND decided_by <> user_id))) STRICT`,
  `CREATE UNIQUE INDEX role_proposal_open ON role_proposal(user_id, site_id, role) WHERE decided_at IS NULL`,
]

export async function up(db: Kysely<unknown>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db)
}
