import { sql, type Kysely } from 'kysely'

/** A reason for a questioned value is bound to what it answered: the words of the question and the cells it rested on. */
const statements = [
  `ALTER TABLE study_kept_check ADD COLUMN sentence TEXT`,
  `ALTER TABLE study_kept_check ADD COLUMN cells_json TEXT`,
]

export async function up(db: Kysely<unknown>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db)
}
