import { sql, type Kysely } from 'kysely'

/**
 * The calendar of a site (rooms, working hours, closed days), how a patient may be written to, who looks after a
 * referral, what the referring physician was asked or told by a mailed link, appointments as calendar files and
 * saved views of a list.
 */
const statements = [
  // Rooms become rows of their own; their names stay what bookings hold.
  `CREATE TABLE site_room (
    id TEXT PRIMARY KEY, site_id TEXT NOT NULL REFERENCES site(id), name TEXT NOT NULL, note TEXT NOT NULL DEFAULT '', position INTEGER NOT NULL, closed_at TEXT, UNIQUE (site_id, name)) STRICT`,
  `INSERT INTO site_room (id, site_id, name, position) SELECT lower(hex(randomblob(16))), site.id, room.value, room.key FROM site, json_each(site.rooms_json) AS room WHERE true ON CONFLICT DO NOTHING`,
  `ALTER TABLE site DROP COLUMN rooms_json`,
  `CREATE TABLE site_hours (
    site_id TEXT NOT NULL REFERENCES site(id), weekday INTEGER NOT NULL CHECK (weekday BETWEEN 1 AND 7), opens_at TEXT NOT NULL CHECK (opens_at GLOB '[0-2][0-9]:[0-5][0-9]'),
    closes_at TEXT NOT NULL CHECK (closes_at GLOB '[0-2][0-9]:[0-5][0-9]' AND closes_at > opens_at), PRIMARY KEY (site_id, weekday, opens_at)) STRICT, WITHOUT ROWID`,
  // Eight to five on weekdays: common practice, to be corrected under Sites.
  `INSERT INTO site_hours (site_id, weekday, opens_at, closes_at) SELECT site.id, day.value, '08:00', '17:00' FROM site, json_each('[1,2,3,4,5]') AS day`,
  `CREATE TABLE site_closed_day (
    site_id TEXT NOT NULL REFERENCES site(id), day TEXT NOT NULL CHECK (day GLOB '[0-9][0-9][0-9][0-9]-[0-9][0-9]-[0-9][0-9]'), reason TEXT NOT NULL DEFAULT '', PRIMARY KEY (site_id, day)) STRICT, WITHOUT ROWID`,

  // How a patient may be written to.
  `ALTER TABLE patient ADD COLUMN email TEXT NOT NULL DEFAULT ''`,
  `ALTER TABLE patient ADD COLUMN mail_consent TEXT NOT NULL DEFAULT 'not-asked' CHECK (mail_consent IN ('yes','no','not-asked'))`,

  `ALTER TABLE referral ADD COLUMN owner_id TEXT REFERENCES user(id)`,
  `CREATE INDEX referral_owner ON referral(owner_id) WHERE owner_id IS NOT NULL`,

  // What the referring physician was asked (and answered), or told when the referral was declined.
  `CREATE TABLE referrer_letter (
    id TEXT PRIMARY KEY, referral_id TEXT NOT NULL REFERENCES referral(id), kind TEXT NOT NULL CHECK (kind IN ('information','advice')), physician_id TEXT REFERENCES physician(id),
    reasons_json TEXT NOT NULL DEFAULT '[]', note TEXT NOT NULL DEFAULT '', created_at TEXT NOT NULL, created_by TEXT NOT NULL REFERENCES user(id),
    mail_id TEXT, mailed_at TEXT, reminded_at TEXT, reminders INTEGER NOT NULL DEFAULT 0, wrong_births INTEGER NOT NULL DEFAULT 0,
    closed_at TEXT, closed_because TEXT CHECK (closed_because IN ('answered','read','received','withdrawn','guessed')), answer_json TEXT, seen_at TEXT) STRICT`,
  `CREATE INDEX referrer_letter_referral ON referrer_letter(referral_id, created_at)`,

  // Files that come by such a link have no account behind them.
  `CREATE TABLE upload_again (
    id TEXT PRIMARY KEY, referral_id TEXT REFERENCES referral(id), study_id TEXT REFERENCES study(id), stored_name TEXT NOT NULL UNIQUE, original_name TEXT NOT NULL, media_type TEXT NOT NULL,
    byte_count INTEGER NOT NULL, sha256 TEXT NOT NULL, created_at TEXT NOT NULL, created_by TEXT REFERENCES user(id), letter_id TEXT REFERENCES referrer_letter(id), removed_at TEXT,
    CHECK (created_by IS NOT NULL OR letter_id IS NOT NULL)) STRICT`,
  `INSERT INTO upload_again (id, referral_id, study_id, stored_name, original_name, media_type, byte_count, sha256, created_at, created_by, removed_at)
    SELECT id, referral_id, study_id, stored_name, original_name, media_type, byte_count, sha256, created_at, created_by, removed_at FROM upload`,
  `DROP TABLE upload`,
  `ALTER TABLE upload_again RENAME TO upload`,
  `CREATE INDEX upload_referral ON upload(referral_id)`,
  `CREATE INDEX upload_study ON upload(study_id)`,

  // One appointment in the patient's own calendar per referral: the same UID for ever, a growing sequence.
  `CREATE TABLE appointment (
    referral_id TEXT PRIMARY KEY REFERENCES referral(id), uid TEXT NOT NULL UNIQUE, sequence INTEGER NOT NULL DEFAULT 0, told_booking_id TEXT REFERENCES booking(id), told_address TEXT NOT NULL DEFAULT '', told_mail_id TEXT, reminder_mail_id TEXT) STRICT`,

  `CREATE TABLE list_view (
    id TEXT PRIMARY KEY, user_id TEXT NOT NULL REFERENCES user(id), room TEXT NOT NULL, name TEXT NOT NULL COLLATE NOCASE, query TEXT NOT NULL, created_at TEXT NOT NULL, UNIQUE (user_id, room, name)) STRICT`,
]

export async function up(db: Kysely<unknown>): Promise<void> {
  for (const statement of statements) await sql.raw(statement).execute(db)
}
