import { sql, type Kysely } from 'kysely'

/**
 * The first tables. Text ids are random (uuid); moments are ISO 8601 in UTC; days are ISO dates.
 * Every table is STRICT. Booleans are 0 or 1. Columns ending in _json hold JSON text.
 * Triggers refuse any change to what must never change: audit, views, signed versions, their PDFs.
 */

/** What a patient is found by. Letters that have no accent to take off (ł, ø, ß, …) and apostrophes are written once more as people type them. */
const foldedNames = [['ł', 'l'], ['Ł', 'L'], ['ø', 'o'], ['Ø', 'O'], ['đ', 'd'], ['Đ', 'D'], ['ð', 'd'], ['þ', 'th'], ['ß', 'ss'], ['æ', 'ae'], ['Æ', 'Ae'], ['œ', 'oe'], ['ı', 'i'], ['\'\'', ''], ['’', '']]
  .reduce((words, [from, to]) => `replace(${words}, '${from}', '${to}')`, 'new.family_name || \' \' || new.given_name')
const searchWords = `new.family_name || ' ' || new.given_name || ' ' || ${foldedNames} || ' ' || new.record_number || ' ' || replace(new.record_number, '-', '') || ' ' || new.identifier || ' ' || new.birth_date`

/** A room or a technologist cannot be in two bookings at once, a technologist not even at two sites. No booking lasts a day, so older ones are not looked at. */
const overlapsNew = `b.id <> new.id AND b.state IN ('booked','arrived') AND b.starts_at < new.ends_at AND b.starts_at > strftime('%Y-%m-%dT%H:%M:%fZ', new.starts_at, '-1 day') AND b.ends_at > new.starts_at`
const bookingOverlap = `(EXISTS (SELECT 1 FROM booking b WHERE b.site_id = new.site_id AND b.room = new.room AND ${overlapsNew}) OR EXISTS (SELECT 1 FROM booking b WHERE b.technologist_id = new.technologist_id AND ${overlapsNew}))`

/** When a referral is booked for stands beside it too, so that the worklist can be sorted by it. */
const bookingStart = `UPDATE referral SET booking_starts_at = (SELECT max(starts_at) FROM booking WHERE referral_id = new.referral_id AND state IN ('booked','arrived','attended')) WHERE id = new.referral_id;`

const statements = `
CREATE TABLE meta (key TEXT PRIMARY KEY, value TEXT NOT NULL) STRICT;

CREATE TABLE counter (name TEXT PRIMARY KEY, value INTEGER NOT NULL) STRICT;

CREATE TABLE organisation (
  id TEXT PRIMARY KEY, name TEXT NOT NULL, paper_size TEXT NOT NULL DEFAULT 'A4' CHECK (paper_size IN ('A4','LETTER')),
  report_language TEXT NOT NULL DEFAULT 'en', time_zone TEXT NOT NULL, disclaimer TEXT NOT NULL CHECK (length(trim(disclaimer)) > 20),
  demonstration INTEGER NOT NULL DEFAULT 0, created_at TEXT NOT NULL) STRICT;

CREATE TABLE site (
  id TEXT PRIMARY KEY, organisation_id TEXT NOT NULL REFERENCES organisation(id), name TEXT NOT NULL UNIQUE, town TEXT NOT NULL, address TEXT NOT NULL DEFAULT '',
  phone TEXT NOT NULL DEFAULT '', time_zone TEXT NOT NULL, hand_minimum_c REAL NOT NULL DEFAULT 32, foot_minimum_c REAL NOT NULL DEFAULT 30,
  distance_uncertainty_mm REAL NOT NULL DEFAULT 5, latency_uncertainty_ms REAL NOT NULL DEFAULT 0.1, rooms_json TEXT NOT NULL DEFAULT '[]',
  closed_at TEXT, created_at TEXT NOT NULL) STRICT;

CREATE TABLE user (
  id TEXT PRIMARY KEY, email TEXT NOT NULL UNIQUE COLLATE NOCASE, name TEXT NOT NULL, printed_name TEXT NOT NULL DEFAULT '', credentials TEXT NOT NULL DEFAULT '',
  password_hash TEXT, totp_secret_sealed TEXT, totp_enabled_at TEXT, totp_last_step INTEGER, last_seen_at TEXT, deactivated_at TEXT, created_at TEXT NOT NULL) STRICT;

CREATE TABLE recovery_code (
  id TEXT PRIMARY KEY, user_id TEXT NOT NULL REFERENCES user(id), code_hash TEXT NOT NULL UNIQUE, created_at TEXT NOT NULL, used_at TEXT) STRICT;

CREATE TABLE role_holding (
  id TEXT PRIMARY KEY, user_id TEXT NOT NULL REFERENCES user(id), site_id TEXT NOT NULL REFERENCES site(id),
  role TEXT NOT NULL CHECK (role IN ('technologist','neurologist','administrator','medical-director','referring-physician')),
  starts_on TEXT NOT NULL, ends_on TEXT, granted_by TEXT REFERENCES user(id), created_at TEXT NOT NULL) STRICT;
CREATE INDEX role_holding_user ON role_holding(user_id);

CREATE TABLE session (
  id_hash TEXT PRIMARY KEY, user_id TEXT NOT NULL REFERENCES user(id), created_at TEXT NOT NULL, last_used_at TEXT NOT NULL, expires_at TEXT NOT NULL,
  second_factor INTEGER NOT NULL DEFAULT 0, agent TEXT NOT NULL DEFAULT '', ended_at TEXT, ended_because TEXT) STRICT;
CREATE INDEX session_user ON session(user_id);

CREATE TABLE one_time_link (
  token_hash TEXT PRIMARY KEY, purpose TEXT NOT NULL, user_id TEXT REFERENCES user(id), data_json TEXT NOT NULL DEFAULT '{}', created_at TEXT NOT NULL, expires_at TEXT NOT NULL, used_at TEXT) STRICT;

CREATE TABLE practice (
  id TEXT PRIMARY KEY, name TEXT NOT NULL, town TEXT NOT NULL, address TEXT NOT NULL DEFAULT '', phone TEXT NOT NULL DEFAULT '',
  delivery_method TEXT NOT NULL DEFAULT 'encrypted-pdf' CHECK (delivery_method IN ('encrypted-pdf','collection-link')),
  passphrase_sealed TEXT, passphrase_made_at TEXT, passphrase_handed_over_at TEXT, closed_at TEXT, created_at TEXT NOT NULL) STRICT;

CREATE TABLE physician (
  id TEXT PRIMARY KEY, practice_id TEXT NOT NULL REFERENCES practice(id), name TEXT NOT NULL, title TEXT NOT NULL DEFAULT '', email TEXT NOT NULL COLLATE NOCASE,
  email_verified_at TEXT, phone TEXT NOT NULL DEFAULT '', left_on TEXT, user_id TEXT REFERENCES user(id), created_at TEXT NOT NULL) STRICT;
CREATE INDEX physician_practice ON physician(practice_id);

CREATE TABLE patient (
  id TEXT PRIMARY KEY, record_number TEXT NOT NULL UNIQUE, family_name TEXT NOT NULL, given_name TEXT NOT NULL, birth_date TEXT NOT NULL,
  sex_for_limits TEXT CHECK (sex_for_limits IN ('female','male')), gender TEXT NOT NULL DEFAULT '', identifier TEXT NOT NULL DEFAULT '', phone TEXT NOT NULL DEFAULT '',
  interpreter TEXT NOT NULL DEFAULT '', merged_into TEXT REFERENCES patient(id), created_at TEXT NOT NULL, created_by TEXT REFERENCES user(id), revision INTEGER NOT NULL DEFAULT 1) STRICT;
CREATE INDEX patient_name ON patient(family_name, given_name);
CREATE INDEX patient_birth ON patient(birth_date);
CREATE VIRTUAL TABLE patient_search USING fts5(patient_id UNINDEXED, words, tokenize = 'unicode61 remove_diacritics 2', prefix = '2 3');
CREATE TRIGGER patient_search_insert AFTER INSERT ON patient BEGIN
  INSERT INTO patient_search (patient_id, words) VALUES (new.id, ${searchWords});
END;
CREATE TRIGGER patient_search_update AFTER UPDATE OF family_name, given_name, record_number, identifier, birth_date ON patient BEGIN
  DELETE FROM patient_search WHERE patient_id = new.id;
  INSERT INTO patient_search (patient_id, words) VALUES (new.id, ${searchWords});
END;

CREATE TABLE referral (
  id TEXT PRIMARY KEY, number TEXT NOT NULL UNIQUE, patient_id TEXT NOT NULL REFERENCES patient(id), site_id TEXT NOT NULL REFERENCES site(id),
  physician_id TEXT REFERENCES physician(id),
  state TEXT NOT NULL CHECK (state IN ('draft','received','returned','accepted','booked','did-not-attend','attended','answered','declined','cancelled','entered-in-error')),
  state_since TEXT NOT NULL, state_reason TEXT NOT NULL DEFAULT '',
  urgency TEXT NOT NULL DEFAULT 'routine' CHECK (urgency IN ('routine','urgent','same-week')), urgency_reason TEXT NOT NULL DEFAULT '',
  clinical_question TEXT NOT NULL DEFAULT '', side TEXT CHECK (side IN ('right','left','both','midline')), body_site TEXT NOT NULL DEFAULT '',
  symptoms TEXT NOT NULL DEFAULT '', onset TEXT NOT NULL DEFAULT '', weakness TEXT NOT NULL DEFAULT 'not-asked', sensory_symptoms TEXT NOT NULL DEFAULT 'not-asked', pain TEXT NOT NULL DEFAULT 'not-asked',
  examination TEXT NOT NULL DEFAULT '', provisional_diagnosis TEXT NOT NULL DEFAULT '', previous_studies TEXT NOT NULL DEFAULT '',
  cautions_json TEXT NOT NULL DEFAULT '{}', needs TEXT NOT NULL DEFAULT '', consent_electronic TEXT NOT NULL DEFAULT 'not-asked', report_language TEXT NOT NULL DEFAULT 'en',
  protocol TEXT, received_at TEXT, booking_starts_at TEXT, created_at TEXT NOT NULL, created_by TEXT NOT NULL REFERENCES user(id), revision INTEGER NOT NULL DEFAULT 1) STRICT;
CREATE INDEX referral_list ON referral(site_id, state, urgency, state_since, id);
CREATE INDEX referral_since ON referral(state_since);
CREATE INDEX referral_booking ON referral(booking_starts_at, number);
CREATE INDEX referral_patient ON referral(patient_id);
CREATE TABLE referral_count (
  site_id TEXT NOT NULL, state TEXT NOT NULL, urgency TEXT NOT NULL, n INTEGER NOT NULL, PRIMARY KEY (site_id, state, urgency)) STRICT, WITHOUT ROWID;
CREATE TRIGGER referral_count_insert AFTER INSERT ON referral BEGIN
  INSERT INTO referral_count (site_id, state, urgency, n) VALUES (new.site_id, new.state, new.urgency, 1) ON CONFLICT (site_id, state, urgency) DO UPDATE SET n = n + 1;
END;
CREATE TRIGGER referral_count_update AFTER UPDATE OF site_id, state, urgency ON referral BEGIN
  UPDATE referral_count SET n = n - 1 WHERE site_id = old.site_id AND state = old.state AND urgency = old.urgency;
  INSERT INTO referral_count (site_id, state, urgency, n) VALUES (new.site_id, new.state, new.urgency, 1) ON CONFLICT (site_id, state, urgency) DO UPDATE SET n = n + 1;
END;
CREATE TRIGGER referral_count_delete AFTER DELETE ON referral BEGIN
  UPDATE referral_count SET n = n - 1 WHERE site_id = old.site_id AND state = old.state AND urgency = old.urgency;
END;

CREATE TABLE referral_copy (
  referral_id TEXT NOT NULL REFERENCES referral(id), physician_id TEXT NOT NULL REFERENCES physician(id), PRIMARY KEY (referral_id, physician_id)) STRICT;

CREATE TABLE state_change (
  id INTEGER PRIMARY KEY, subject TEXT NOT NULL CHECK (subject IN ('referral','study','report-version','delivery')), subject_id TEXT NOT NULL,
  from_state TEXT, to_state TEXT NOT NULL, at TEXT NOT NULL, by_user_id TEXT REFERENCES user(id), reason TEXT NOT NULL DEFAULT '') STRICT;
CREATE INDEX state_change_subject ON state_change(subject, subject_id);

CREATE TABLE upload (
  id TEXT PRIMARY KEY, referral_id TEXT REFERENCES referral(id), study_id TEXT REFERENCES study(id), stored_name TEXT NOT NULL UNIQUE, original_name TEXT NOT NULL, media_type TEXT NOT NULL,
  byte_count INTEGER NOT NULL, sha256 TEXT NOT NULL, created_at TEXT NOT NULL, created_by TEXT NOT NULL REFERENCES user(id), removed_at TEXT) STRICT;
CREATE INDEX upload_referral ON upload(referral_id);

CREATE TABLE booking (
  id TEXT PRIMARY KEY, referral_id TEXT NOT NULL REFERENCES referral(id), site_id TEXT NOT NULL REFERENCES site(id), room TEXT NOT NULL, technologist_id TEXT REFERENCES user(id),
  starts_at TEXT NOT NULL, ends_at TEXT NOT NULL CHECK (ends_at > starts_at AND julianday(ends_at) - julianday(starts_at) < 1), state TEXT NOT NULL CHECK (state IN ('booked','arrived','attended','did-not-attend','cancelled')), reason TEXT NOT NULL DEFAULT '',
  created_at TEXT NOT NULL, created_by TEXT NOT NULL REFERENCES user(id)) STRICT;
CREATE INDEX booking_day ON booking(site_id, starts_at);
CREATE INDEX booking_referral ON booking(referral_id);
CREATE TRIGGER booking_start_insert AFTER INSERT ON booking BEGIN
  ${bookingStart}
END;
CREATE TRIGGER booking_start_update AFTER UPDATE OF state, starts_at ON booking BEGIN
  ${bookingStart}
END;
CREATE INDEX booking_technologist ON booking(technologist_id, starts_at);
CREATE TRIGGER booking_overlap_insert BEFORE INSERT ON booking WHEN new.state IN ('booked','arrived') AND ${bookingOverlap}
  BEGIN SELECT RAISE(ABORT, 'booking-overlap'); END;
CREATE TRIGGER booking_overlap_update BEFORE UPDATE ON booking WHEN new.state IN ('booked','arrived') AND ${bookingOverlap}
  BEGIN SELECT RAISE(ABORT, 'booking-overlap'); END;

CREATE TABLE study (
  id TEXT PRIMARY KEY, number TEXT NOT NULL UNIQUE, referral_id TEXT NOT NULL REFERENCES referral(id), patient_id TEXT NOT NULL REFERENCES patient(id), site_id TEXT NOT NULL REFERENCES site(id),
  state TEXT NOT NULL CHECK (state IN ('planned','recording','handed-over','returned','read','stopped','entered-in-error')), state_since TEXT NOT NULL, state_reason TEXT NOT NULL DEFAULT '',
  study_date TEXT NOT NULL, started_at TEXT, handed_over_at TEXT, technologist_id TEXT REFERENCES user(id), reader_id TEXT REFERENCES user(id), taken_at TEXT,
  protocol TEXT, height_cm REAL, weight_kg REAL, confirmation_json TEXT, hand_over_note TEXT NOT NULL DEFAULT '', return_question TEXT NOT NULL DEFAULT '', return_run_id TEXT,
  excluded_entrapment INTEGER NOT NULL DEFAULT 0, policy_json TEXT, summary_json TEXT, created_at TEXT NOT NULL, revision INTEGER NOT NULL DEFAULT 1) STRICT;
CREATE INDEX study_state ON study(site_id, state, state_since);
CREATE INDEX study_since ON study(state_since);
CREATE INDEX study_patient ON study(patient_id);
CREATE INDEX study_referral ON study(referral_id);

CREATE TABLE study_run (
  id TEXT PRIMARY KEY, study_id TEXT NOT NULL REFERENCES study(id), technique TEXT NOT NULL, side TEXT NOT NULL CHECK (side IN ('right','left')), position INTEGER NOT NULL,
  planned INTEGER NOT NULL DEFAULT 0, settings_json TEXT NOT NULL DEFAULT '{}', removed_at TEXT, created_at TEXT NOT NULL, created_by TEXT REFERENCES user(id), revision INTEGER NOT NULL DEFAULT 1) STRICT;
CREATE INDEX study_run_study ON study_run(study_id, position);

CREATE TABLE study_row (
  id TEXT PRIMARY KEY, run_id TEXT NOT NULL REFERENCES study_run(id), site TEXT NOT NULL, position INTEGER NOT NULL, removed_at TEXT) STRICT;
CREATE INDEX study_row_run ON study_row(run_id, position);

CREATE TABLE study_cell (
  row_id TEXT NOT NULL REFERENCES study_row(id), field TEXT NOT NULL, study_id TEXT NOT NULL REFERENCES study(id), entry_json TEXT NOT NULL, revision INTEGER NOT NULL,
  saved_at TEXT NOT NULL, saved_by TEXT NOT NULL REFERENCES user(id), PRIMARY KEY (row_id, field)) STRICT, WITHOUT ROWID;
CREATE INDEX study_cell_study ON study_cell(study_id);
CREATE TABLE study_cell_save (
  study_id TEXT NOT NULL REFERENCES study(id), save_id TEXT NOT NULL, row_id TEXT NOT NULL, field TEXT NOT NULL, revision INTEGER NOT NULL, saved_at TEXT NOT NULL,
  PRIMARY KEY (study_id, save_id)) STRICT, WITHOUT ROWID;

CREATE TABLE study_temperature (
  id TEXT PRIMARY KEY, study_id TEXT NOT NULL REFERENCES study(id), segment TEXT NOT NULL CHECK (segment IN ('hand','foot')), side TEXT NOT NULL CHECK (side IN ('right','left')),
  celsius REAL NOT NULL CHECK (celsius BETWEEN 15 AND 42), at TEXT NOT NULL, method TEXT NOT NULL DEFAULT '', warmed INTEGER NOT NULL DEFAULT 0, removed_at TEXT, saved_by TEXT NOT NULL REFERENCES user(id)) STRICT;
CREATE INDEX study_temperature_study ON study_temperature(study_id);

CREATE TABLE study_kept_check (
  study_id TEXT NOT NULL REFERENCES study(id), key TEXT NOT NULL, reason TEXT NOT NULL, kept_by TEXT NOT NULL REFERENCES user(id), kept_at TEXT NOT NULL, PRIMARY KEY (study_id, key)) STRICT, WITHOUT ROWID;

CREATE TABLE report (
  id TEXT PRIMARY KEY, study_id TEXT NOT NULL UNIQUE REFERENCES study(id), number TEXT NOT NULL UNIQUE, draft_json TEXT NOT NULL DEFAULT '{}', draft_revision INTEGER NOT NULL DEFAULT 1,
  ready_fingerprint TEXT, drafted_by TEXT REFERENCES user(id), drafted_at TEXT NOT NULL, created_at TEXT NOT NULL) STRICT;

CREATE TABLE report_version (
  id TEXT PRIMARY KEY, report_id TEXT NOT NULL REFERENCES report(id), version INTEGER NOT NULL,
  status TEXT NOT NULL CHECK (status IN ('final','appended','amended','corrected','entered-in-error')), reason TEXT NOT NULL DEFAULT '',
  snapshot_json TEXT NOT NULL, snapshot_sha256 TEXT NOT NULL, calculation_version TEXT NOT NULL, signed_by TEXT NOT NULL REFERENCES user(id), signed_at TEXT NOT NULL,
  signed_name TEXT NOT NULL, signed_credentials TEXT NOT NULL, meaning TEXT NOT NULL, audit_head TEXT NOT NULL, UNIQUE (report_id, version)) STRICT;
CREATE TRIGGER report_version_no_update BEFORE UPDATE ON report_version BEGIN SELECT RAISE(ABORT, 'A signed version is never altered.'); END;
CREATE TRIGGER report_version_no_delete BEFORE DELETE ON report_version BEGIN SELECT RAISE(ABORT, 'A signed version is never removed.'); END;

CREATE TABLE report_pdf (
  report_version_id TEXT PRIMARY KEY REFERENCES report_version(id), bytes BLOB NOT NULL, sha256 TEXT NOT NULL, made_at TEXT NOT NULL) STRICT;
CREATE TRIGGER report_pdf_no_update BEFORE UPDATE ON report_pdf BEGIN SELECT RAISE(ABORT, 'A stored PDF is never altered.'); END;
CREATE TRIGGER report_pdf_no_delete BEFORE DELETE ON report_pdf BEGIN SELECT RAISE(ABORT, 'A stored PDF is never removed.'); END;

CREATE TABLE delivery (
  id TEXT PRIMARY KEY, report_version_id TEXT NOT NULL REFERENCES report_version(id), physician_id TEXT NOT NULL REFERENCES physician(id), practice_id TEXT NOT NULL REFERENCES practice(id),
  site_id TEXT NOT NULL REFERENCES site(id), address TEXT NOT NULL, method TEXT NOT NULL CHECK (method IN ('encrypted-pdf','collection-link','letter','telephone')),
  state TEXT NOT NULL CHECK (state IN ('held','queued','sending','sent','acknowledged','failed','given-up','bounced','uncertain','withdrawn','by-hand')), state_since TEXT NOT NULL, state_reason TEXT NOT NULL DEFAULT '',
  hold_until TEXT, attempts INTEGER NOT NULL DEFAULT 0, acknowledge_token_hash TEXT UNIQUE, acknowledged_at TEXT, sent_at TEXT, created_at TEXT NOT NULL,
  UNIQUE (report_version_id, physician_id, method)) STRICT;
CREATE INDEX delivery_state ON delivery(site_id, state, state_since);

CREATE TABLE outbox_mail (
  id TEXT PRIMARY KEY, template TEXT NOT NULL, delivery_id TEXT UNIQUE REFERENCES delivery(id), to_address TEXT NOT NULL, data_sealed TEXT NOT NULL DEFAULT '', message_id TEXT NOT NULL UNIQUE,
  state TEXT NOT NULL CHECK (state IN ('held','queued','sending','sent','failed','given-up','bounced','uncertain','withdrawn')),
  due_at TEXT NOT NULL, attempts INTEGER NOT NULL DEFAULT 0, lease_owner TEXT, lease_until TEXT, last_byte_at TEXT, last_error TEXT NOT NULL DEFAULT '', sent_at TEXT, created_at TEXT NOT NULL) STRICT;
CREATE INDEX outbox_due ON outbox_mail(state, due_at);

CREATE TABLE task (
  id TEXT PRIMARY KEY, kind TEXT NOT NULL, subject TEXT NOT NULL, subject_id TEXT NOT NULL, site_id TEXT REFERENCES site(id), owner_id TEXT REFERENCES user(id), owner_role TEXT,
  sentence TEXT NOT NULL, created_at TEXT NOT NULL, due_at TEXT, done_at TEXT, done_by TEXT REFERENCES user(id), resolution TEXT NOT NULL DEFAULT '') STRICT;
CREATE INDEX task_open ON task(site_id, done_at, due_at);

CREATE TABLE reference_adoption (
  id TEXT PRIMARY KEY, site_id TEXT NOT NULL REFERENCES site(id), set_id TEXT NOT NULL, set_version INTEGER NOT NULL, techniques_json TEXT, position INTEGER NOT NULL DEFAULT 1,
  proposed_by TEXT NOT NULL REFERENCES user(id), proposed_at TEXT NOT NULL, approved_by TEXT REFERENCES user(id), approved_at TEXT, effective_on TEXT NOT NULL, ended_on TEXT, ended_by TEXT REFERENCES user(id),
  CHECK (approved_by IS NULL OR approved_by <> proposed_by)) STRICT;
CREATE INDEX reference_adoption_site ON reference_adoption(site_id);

CREATE TABLE row_check (
  set_id TEXT NOT NULL, set_version INTEGER NOT NULL, row_id TEXT NOT NULL, checked_by TEXT NOT NULL REFERENCES user(id), checked_at TEXT NOT NULL, PRIMARY KEY (set_id, set_version, row_id)) STRICT, WITHOUT ROWID;

CREATE TABLE audit_event (
  seq INTEGER PRIMARY KEY, id TEXT NOT NULL UNIQUE, at TEXT NOT NULL, actor_id TEXT, actor_label TEXT NOT NULL, site_id TEXT, name TEXT NOT NULL, subject TEXT NOT NULL, subject_id TEXT NOT NULL,
  patient_id TEXT, data_json TEXT NOT NULL, previous_mac TEXT NOT NULL, mac TEXT NOT NULL) STRICT;
CREATE INDEX audit_subject ON audit_event(subject, subject_id);
CREATE INDEX audit_patient ON audit_event(patient_id);
CREATE INDEX audit_actor ON audit_event(actor_id, at);
CREATE TRIGGER audit_event_no_update BEFORE UPDATE ON audit_event BEGIN SELECT RAISE(ABORT, 'The audit trail is never altered.'); END;
CREATE TRIGGER audit_event_no_delete BEFORE DELETE ON audit_event BEGIN SELECT RAISE(ABORT, 'The audit trail is never altered.'); END;

CREATE TABLE view_event (
  seq INTEGER PRIMARY KEY, at TEXT NOT NULL, actor_id TEXT NOT NULL, site_id TEXT, subject TEXT NOT NULL, subject_id TEXT NOT NULL, patient_id TEXT, because TEXT NOT NULL DEFAULT '',
  previous_mac TEXT NOT NULL, mac TEXT NOT NULL) STRICT;
CREATE INDEX view_patient ON view_event(patient_id);
CREATE TRIGGER view_event_no_update BEFORE UPDATE ON view_event BEGIN SELECT RAISE(ABORT, 'The record of views is never altered.'); END;
CREATE TRIGGER view_event_no_delete BEFORE DELETE ON view_event BEGIN SELECT RAISE(ABORT, 'The record of views is never altered.'); END;
`

/** Splits at a semicolon that ends a line, except inside a trigger's body, which ends with END; */
function split(text: string): string[] {
  const parts: string[] = []
  let current = ''
  for (const line of text.split('\n')) {
    current += line + '\n'
    const inTrigger = /^\s*CREATE TRIGGER/.test(current.trimStart())
    if (inTrigger ? /END;\s*$/.test(line) : /;\s*$/.test(line)) {
      parts.push(current.trim())
      current = ''
    }
  }
  return parts.filter(Boolean)
}

export async function up(db: Kysely<unknown>): Promise<void> {
  for (const statement of split(statements)) await sql.raw(statement).execute(db)
}
