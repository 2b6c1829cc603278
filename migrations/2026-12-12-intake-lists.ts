import { sql, type Kysely } from 'kysely'

/** What came back and nobody noted yet is looked for in every list of referrals. */
const statements = [
  `CREATE INDEX referrer_letter_unseen ON referrer_letter(referral_id) WHERE closed_because = 'answered' AND seen_at IS NULL`,
]

export async function up(db: Kysely<unknown>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db)
}
