import { sql, type Kysely } from 'kysely'

/**
 * Dispatch: what came back (bounces), what went to the wrong people (incidents), what was delivered by hand, what
 * recipients wrote back, and links that were renewed. A report that was withdrawn may go to the same physician again.
 */
const statements = [
  `ALTER TABLE delivery ADD COLUMN link_renewed_at TEXT`,
  `CREATE TABLE bounce_report (
    id TEXT PRIMARY KEY, mail_id TEXT NOT NULL REFERENCES outbox_mail(id), status TEXT NOT NULL, diagnostic TEXT NOT NULL DEFAULT '', at TEXT NOT NULL) STRICT`,
  `CREATE INDEX bounce_report_mail ON bounce_report(mail_id)`,
  `CREATE TABLE incident (
    id TEXT PRIMARY KEY, delivery_id TEXT NOT NULL UNIQUE REFERENCES delivery(id), site_id TEXT NOT NULL REFERENCES site(id),
    reason TEXT NOT NULL, aware_at TEXT NOT NULL, opened_at TEXT NOT NULL, opened_by TEXT REFERENCES user(id),
    data_nature TEXT NOT NULL DEFAULT '', who_got_it TEXT NOT NULL DEFAULT '', viewed TEXT NOT NULL DEFAULT 'unknown' CHECK (viewed IN ('no','yes','unknown')), viewed_words TEXT NOT NULL DEFAULT '', mitigation TEXT NOT NULL DEFAULT '',
    contact_name TEXT NOT NULL DEFAULT '', contact_at TEXT, contact_means TEXT CHECK (contact_means IN ('telephone','letter','in-person','e-mail')), contact_words TEXT NOT NULL DEFAULT '', deletion_confirmed INTEGER NOT NULL DEFAULT 0,
    decision TEXT CHECK (decision IN ('nobody','authority','individuals','both')), decision_reason TEXT NOT NULL DEFAULT '', told_at TEXT,
    closed_at TEXT, closed_by TEXT REFERENCES user(id), revision INTEGER NOT NULL DEFAULT 1,
    CHECK ((closed_at IS NULL) = (closed_by IS NULL))) STRICT`,
  `CREATE INDEX incident_list ON incident(site_id, closed_at, aware_at)`,
  `CREATE TABLE delivery_by_hand (
    id TEXT PRIMARY KEY, delivery_id TEXT NOT NULL REFERENCES delivery(id), means TEXT NOT NULL CHECK (means IN ('letter','telephone','in-person')), told TEXT NOT NULL, at TEXT NOT NULL,
    read_back INTEGER NOT NULL DEFAULT 0, note TEXT NOT NULL DEFAULT '', recorded_at TEXT NOT NULL, recorded_by TEXT NOT NULL REFERENCES user(id)) STRICT`,
  `CREATE INDEX delivery_by_hand_delivery ON delivery_by_hand(delivery_id)`,
  `CREATE TABLE delivery_reply (
    id TEXT PRIMARY KEY, delivery_id TEXT NOT NULL REFERENCES delivery(id), words TEXT NOT NULL, from_name TEXT NOT NULL DEFAULT '', at TEXT NOT NULL,
    answer TEXT NOT NULL DEFAULT '', answered_at TEXT, answered_by TEXT REFERENCES user(id)) STRICT`,
  `CREATE INDEX delivery_reply_delivery ON delivery_reply(delivery_id)`,
  `INSERT INTO incident (id, delivery_id, site_id, reason, aware_at, opened_at, opened_by)
    SELECT lower(hex(randomblob(16))), delivery.id, delivery.site_id, delivery.state_reason, min(task.created_at), min(task.created_at), NULL
    FROM delivery JOIN task ON task.subject_id = delivery.id AND task.kind = 'incident' AND task.done_at IS NULL GROUP BY delivery.id`,
]

const oneEach = ',\n  UNIQUE (report_version_id, physician_id, method)'

/**
 * One living delivery for each version and physician, however it goes: withdrawn ones do not count. SQLite cannot drop
 * a table's own UNIQUE, so the table is made anew with its rows, indexes and triggers as they stand (sqlite.org,
 * lang_altertable, section 7). A table that is referred to cannot be dropped inside a transaction: the mails let go of
 * their deliveries for that moment.
 */
async function letWithdrawnGoAgain(db: Kysely<unknown>): Promise<void> {
  const { rows } = await sql<{ type: string, sql: string }>`SELECT type, sql FROM sqlite_master WHERE tbl_name = 'delivery' AND sql IS NOT NULL`.execute(db)
  const table = rows.find(row => row.type === 'table')?.sql ?? ''
  if (!table.includes(oneEach)) throw new Error('The table of deliveries is not as this change expects it.')
  const others = rows.filter(row => row.type !== 'table').map(row => row.sql)
  for (const statement of [
    'CREATE TABLE mail_of_delivery AS SELECT id, delivery_id FROM outbox_mail WHERE delivery_id IS NOT NULL',
    'UPDATE outbox_mail SET delivery_id = NULL',
    'CREATE TABLE delivery_rows AS SELECT * FROM delivery',
    'DROP TABLE delivery',
    table.replace(oneEach, ''),
    'INSERT INTO delivery SELECT * FROM delivery_rows',
    'CREATE UNIQUE INDEX mail_of_delivery_id ON mail_of_delivery(id)',
    'UPDATE outbox_mail SET delivery_id = (SELECT delivery_id FROM mail_of_delivery WHERE mail_of_delivery.id = outbox_mail.id)',
    'DROP TABLE delivery_rows',
    'DROP TABLE mail_of_delivery',
    ...others,
    `CREATE UNIQUE INDEX delivery_living ON delivery(report_version_id, physician_id) WHERE state <> 'withdrawn'`,
  ]) await sql.raw(statement).execute(db)
}

export async function up(db: Kysely<unknown>): Promise<void> {
  await letWithdrawnGoAgain(db)
  for (const statement of statements) await sql.raw(statement).execute(db)
}
