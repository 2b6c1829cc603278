import { sql, type Kysely } from 'kysely'

/** How an address was verified and how a passphrase was handed over; indexes by physician, for the directory and the desk. */
const statements = [
  `ALTER TABLE practice ADD COLUMN passphrase_handed_over_on TEXT`,
  `ALTER TABLE practice ADD COLUMN passphrase_handed_over_by TEXT CHECK (passphrase_handed_over_by IN ('telephone','letter','in-person'))`,
  `ALTER TABLE physician ADD COLUMN email_verified_by TEXT CHECK (email_verified_by IN ('code','other'))`,
  `ALTER TABLE physician ADD COLUMN email_verified_note TEXT NOT NULL DEFAULT ''`,
  `CREATE INDEX physician_user ON physician(user_id)`,
  `CREATE INDEX referral_physician ON referral(physician_id)`,
  `CREATE INDEX referral_copy_physician ON referral_copy(physician_id)`,
  `CREATE INDEX delivery_physician ON delivery(physician_id)`,
]

export async function up(db: Kysely<unknown>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db)
}
