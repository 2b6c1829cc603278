import { sql } from 'kysely'
import { describe, expect, it } from 'vitest'
import { migrations } from '#migrations/index'
import { openDatabase } from '#server/database/connection'
import { migrateDatabase } from '#server/database/migrate'
import { testContext } from './helpers'
import { readingRoom } from './reading-helpers'

const t = await testContext()
const names = Object.keys(migrations)
const before = Object.fromEntries(Object.entries(migrations).slice(0, names.indexOf('2026-12-12-dispatch')))

/** A database as it was before, with one delivery that was withdrawn after it left and its open task. */
async function earlierDatabase() {
  const db = openDatabase(`${t.dataDir}/earlier.sqlite`)
  await migrateDatabase(db, before)
  for (const statement of [
    `insert into organisation (id, name, time_zone, disclaimer, created_at) values ('o', 'Invented', 'Europe/Prague', 'This supports a decision and does not replace it.', '2026-01-01')`,
    `insert into site (id, organisation_id, name, town, time_zone, created_at) values ('s', 'o', 'Site', 'Town', 'Europe/Prague', '2026-01-01')`,
    `insert into user (id, email, name, created_at) values ('u', 'a@clinic.example', 'Person', '2026-01-01')`,
    `insert into practice (id, name, town, created_at) values ('p', 'Practice', 'Town', '2026-01-01')`,
    `insert into physician (id, practice_id, name, email, created_at) values ('d', 'p', 'Physician', 'd@practice.example', '2026-01-01')`,
    `insert into patient (id, record_number, family_name, given_name, birth_date, created_at) values ('x', 'P-1', 'Invented', 'Person', '1974-03-14', '2026-01-01')`,
    `insert into referral (id, number, patient_id, site_id, state, state_since, created_at, created_by) values ('r', 'R-1', 'x', 's', 'answered', '2026-01-01', '2026-01-01', 'u')`,
    `insert into study (id, number, referral_id, patient_id, site_id, state, state_since, study_date, created_at) values ('y', 'S-1', 'r', 'x', 's', 'read', '2026-01-01', '2026-01-01', '2026-01-01')`,
    `insert into report (id, study_id, number, drafted_at, created_at) values ('e', 'y', 'REP-1', '2026-01-01', '2026-01-01')`,
    `insert into report_version (id, report_id, version, status, snapshot_json, snapshot_sha256, calculation_version, signed_by, signed_at, signed_name, signed_credentials, meaning, audit_head) values ('v', 'e', 1, 'final', '{}', 'x', '1', 'u', '2026-01-01', 'n', 'c', 'm', 'h')`,
    `insert into delivery (id, report_version_id, physician_id, practice_id, site_id, address, method, state, state_since, state_reason, created_at) values ('l', 'v', 'd', 'p', 's', 'd@practice.example', 'encrypted-pdf', 'withdrawn', '2026-01-02', 'Wrong practice', '2026-01-01')`,
    `insert into outbox_mail (id, template, delivery_id, to_address, message_id, state, due_at, created_at) values ('m', 'report-ready', 'l', 'd@practice.example', '<m@x>', 'sent', '2026-01-01', '2026-01-01')`,
    `insert into task (id, kind, subject, subject_id, site_id, sentence, created_at) values ('t', 'incident', 'delivery', 'l', 's', 'Look', '2026-01-02')`,
  ]) await sql.raw(statement).execute(db)
  return db
}

describe('the change of the database for Dispatch', () => {
  it('keeps every delivery with its mail, its indexes and its references, and makes a record of each open incident', async () => {
    const db = await earlierDatabase()
    await migrateDatabase(db)
    expect(await db.selectFrom('outboxMail').innerJoin('delivery', 'delivery.id', 'outboxMail.deliveryId').select(['delivery.id', 'delivery.state', 'delivery.linkRenewedAt']).execute()).toEqual([{ id: 'l', state: 'withdrawn', linkRenewedAt: null }])
    expect((await db.selectFrom('incident').selectAll().execute())).toMatchObject([{ deliveryId: 'l', siteId: 's', reason: 'Wrong practice', awareAt: '2026-01-02', closedAt: null }])
    expect((await sql`pragma foreign_key_check`.execute(db)).rows).toEqual([])
    const { rows } = await sql<{ name: string }>`select name from sqlite_master where type = 'index' and tbl_name = 'delivery' and sql is not null order by name`.execute(db)
    expect(rows.map(row => row.name)).toEqual(['delivery_living', 'delivery_physician', 'delivery_state'])
    await expect(sql`insert into outbox_mail (id, template, delivery_id, to_address, message_id, state, due_at, created_at) values ('n', 'report-ready', 'nothing', 'd@practice.example', '<n@x>', 'sent', '2026-01-01', '2026-01-01')`.execute(db)).rejects.toThrow(/FOREIGN KEY/)
    await db.destroy()
  })
  it('one living delivery for each version and physician; withdrawn ones do not count', async () => {
    const room = await readingRoom(t)
    const { reportId } = await room.signed()
    const first = await t.db.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').selectAll('delivery').where('reportId', '=', reportId).executeTakeFirstOrThrow()
    const again = { ...first, id: 'another', acknowledgeTokenHash: null, method: 'letter' as const }
    await expect(t.db.insertInto('delivery').values(again).execute()).rejects.toThrow(/UNIQUE/)
    await t.db.updateTable('delivery').set({ state: 'withdrawn' }).where('id', '=', first.id).execute()
    await t.db.insertInto('delivery').values(again).execute()
  })
})
