import { sql, type Kysely } from 'kysely'

/** Since when a patient waits: the moment of arrival stands with the booking. Earlier arrivals are read from the audit trail. */
const statements = [
  `ALTER TABLE booking ADD COLUMN arrived_at TEXT`,
  `UPDATE booking SET arrived_at = (SELECT max(at) FROM audit_event WHERE name = 'booking.arrived' AND subject = 'referral' AND subject_id = booking.referral_id) WHERE state = 'arrived'`,
]

export async function up(db: Kysely<unknown>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db)
}
