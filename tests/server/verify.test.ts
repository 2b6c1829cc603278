import { spawnSync } from 'node:child_process'
import { copyFileSync, mkdtempSync, readdirSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join, resolve } from 'node:path'
import Sqlite from 'better-sqlite3'
import { sql } from 'kysely'
import sharp from 'sharp'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { closePdfThread } from '#server/pdf/render-pdf'
import { sha256Hex } from '#server/services/canonical-json'
import { makeNewVersion } from '#server/services/make-new-version'
import { reportPdf } from '#server/services/make-report-pdf'
import { storeUpload } from '#server/services/store-upload'
import { verifyAudit } from '#server/services/verify-audit'
import { testContext } from './helpers'
import { finishedDraft, meaning, PASSWORD, readingRoom } from './reading-helpers'

const t = await testContext()
const room = await readingRoom(t)
const folder = mkdtempSync(join(tmpdir(), 'orthodrome-verify-'))
const keyFile = join(folder, 'the.key')
let number: string
let copies = 0

beforeAll(async () => {
  writeFileSync(keyFile, Buffer.alloc(32, 7), { mode: 0o600 })
  const { reportId } = await room.signed()
  number = (await t.db.selectFrom('report').select('number').where('id', '=', reportId).executeTakeFirstOrThrow()).number
  await makeNewVersion(room.reader, { reportId, kind: 'appended', reason: 'A line was added.', draft: finishedDraft({ recommendation: 'A splint at night.' }), password: PASSWORD, meaning })
  const first = await t.db.selectFrom('reportVersion').select('id').where('version', '=', 1).executeTakeFirstOrThrow()
  await reportPdf(t.context, first.id)
  const picture = await sharp({ create: { width: 8, height: 8, channels: 3, background: 'white' } }).png().toBuffer()
  await storeUpload(room.technologist, { referralId: await room.accepted(), name: 'letter.png', bytes: picture })
  await sql`pragma wal_checkpoint(TRUNCATE)`.execute(t.db)
})
afterAll(async () => {
  await closePdfThread()
  rmSync(folder, { recursive: true, force: true })
})

/** The program as people run it, on a copy of the data folder to which somebody did something. */
function verifyCopy(...statements: string[]) {
  const copy = join(folder, `copy-${++copies}`)
  spawnSync('cp', ['-r', t.dataDir, copy])
  const database = new Sqlite(join(copy, 'orthodrome.sqlite'))
  for (const statement of statements) database.exec(statement)
  database.close()
  return verify(copy)
}

function verify(dataDir: string) {
  const done = spawnSync(process.execPath, ['scripts/run-ts.mjs', 'scripts/verify.ts'], { encoding: 'utf8', env: { ...process.env, NUXT_DATA_DIR: dataDir, NUXT_KEY_FILE: keyFile, DEMO: '0' } })
  return { exit: done.status, said: done.stdout + done.stderr }
}

/** A trigger taken away and put back leaves no trace of itself. */
function behindTheTrigger(name: string, ...statements: string[]): string[] {
  const source = new Sqlite(t.file, { readonly: true })
  const trigger = source.prepare('select sql from sqlite_master where name = ?').pluck().get(name) as string
  source.close()
  return [`drop trigger ${name}`, ...statements, trigger]
}
const change = (table: string, ...statements: string[]) => behindTheTrigger(`${table}_no_update`, ...statements)
const remove = (table: string, ...statements: string[]) => behindTheTrigger(`${table}_no_delete`, ...statements)

describe('npm run verify', () => {
  it('says what it looked at and ends with 0 while everything is as it was', () => {
    const { exit, said } = verifyCopy()
    expect(said).toMatch(/Signed versions +2 versions, 1 stored PDF +in order/)
    expect(said).toMatch(/Audit trail +\d+ links +in order/)
    expect(said).toMatch(/Uploaded files +1 file +in order/)
    expect(said).toContain('Everything is as it was written.')
    expect(exit).toBe(0)
  })

  it('writes nothing', () => {
    const copy = join(folder, 'untouched')
    spawnSync('cp', ['-r', t.dataDir, copy])
    const before = new Sqlite(join(copy, 'orthodrome.sqlite'), { readonly: true }).prepare('select count(*) from audit_event').pluck().get()
    verify(copy)
    expect(new Sqlite(join(copy, 'orthodrome.sqlite'), { readonly: true }).prepare('select count(*) from audit_event').pluck().get()).toBe(before)
  })

  it.each([
    ['a word of a signed version', () => change('report_version', `update report_version set snapshot_json = replace(snapshot_json, 'Right median', 'Left median') where version = 1`), () => `${number}, version 1: the content does not fit its hash.`],
    ['a signed version, its hash mended too', () => change('report_version', `update report_version set snapshot_json = '{}', snapshot_sha256 = '${sha256Hex('{}')}' where version = 2`), () => `${number}, version 2: the audit trail holds another hash.`],
    ['the printed name of the signer', () => change('report_version', `update report_version set signed_name = 'Somebody Else' where version = 1`), () => `${number}, version 1: the name of the signature was altered.`],
    ['a signed version taken away', () => ['pragma foreign_keys = off', ...remove('report_version', `delete from report_version where version = 2`)], () => `${number}, version 2: the signed version is missing.`],
    ['the number of a report', () => [`update report set number = 'REP-1999-000001'`], () => 'REP-1999-000001, version 1: the number of the report was altered.'],
    ['a stored PDF', () => change('report_pdf', `update report_pdf set bytes = x'255044462d'`), () => `${number}, version 1: the stored PDF does not fit its hash.`],
    ['a stored PDF, its hash mended too', () => change('report_pdf', `update report_pdf set bytes = x'255044462d', sha256 = '${sha256Hex('%PDF-')}'`), () => `${number}, version 1: the audit trail holds another hash of the PDF.`],
    ['a stored PDF taken away', () => remove('report_pdf', `delete from report_pdf`), () => `${number}, version 1: the stored PDF is missing.`],
    ['a row of the audit trail', () => change('audit_event', `update audit_event set data_json = '{' where seq = 7`), () => 'Number 7 was changed'],
    ['a row of the audit trail taken away', () => remove('audit_event', `delete from audit_event where seq = 7`), () => 'Links are missing between number 6 and number 8.'],
    ['a guard', () => ['drop trigger report_pdf_no_update'], () => 'The guard report_pdf_no_update was taken away'],
    ['a guard replaced by one that refuses nothing', () => ['drop trigger view_event_no_delete', 'create trigger view_event_no_delete before delete on view_event begin select 1; end'], () => 'The guard view_event_no_delete was taken away'],
    ['a row that others point to', () => ['pragma foreign_keys = off', 'delete from patient'], () => 'of referral point to a patient that does not exist.'],
  ])('names %s and ends with 1', (_name, statements, words) => {
    const { exit, said } = verifyCopy(...statements())
    expect(said).toContain(words())
    expect(said).toContain('what is named above was altered or is damaged.')
    expect(exit).toBe(1)
  })

  it('names an uploaded file that was altered, and one that is missing', () => {
    const copy = join(folder, 'uploads')
    spawnSync('cp', ['-r', t.dataDir, copy])
    const [name] = readdirSync(join(copy, 'uploads'))
    writeFileSync(join(copy, 'uploads', name!), 'something else')
    expect(verify(copy)).toMatchObject({ exit: 1, said: expect.stringMatching(/The file \S+ of REF-\S+ was altered\./) })
    rmSync(join(copy, 'uploads', name!))
    expect(verify(copy)).toMatchObject({ exit: 1, said: expect.stringMatching(/The file \S+ of REF-\S+ is missing\./) })
  })

  it('says so when the key file is another, the database is missing, or the file is no database', () => {
    const other = join(folder, 'other')
    spawnSync('cp', ['-r', t.dataDir, other])
    writeFileSync(keyFile, Buffer.alloc(32, 8), { mode: 0o600 })
    expect(verify(other)).toMatchObject({ exit: 1, said: expect.stringContaining('Number 1 was changed or was not written by this program.') })
    writeFileSync(keyFile, Buffer.alloc(32, 7), { mode: 0o600 })
    expect(verify(join(folder, 'nowhere'))).toMatchObject({ exit: 1, said: expect.stringContaining('There is no database') })
    copyFileSync(resolve('package.json'), join(other, 'orthodrome.sqlite'))
    expect(verify(other)).toMatchObject({ exit: 1, said: expect.stringContaining('The check could not be finished.') })
  })
})

describe('the check of the ledger', () => {
  it('runs beside the server, names an altered version, and keeps that it was done', async () => {
    const clean = await verifyAudit(t.context)
    expect(clean).toMatchObject({ acts: { intact: true }, views: { intact: true }, reports: { versions: 2, pdfs: 1, altered: [] } })
    for (const statement of behindTheTrigger('report_pdf_no_update', 'update report_pdf set bytes = x\'00\'')) await sql.raw(statement).execute(t.db)
    expect((await verifyAudit(t.context)).reports.altered).toMatchObject([{ number, version: 1, because: 'the stored PDF does not fit its hash' }])
    const events = await t.db.selectFrom('auditEvent').select('dataJson').where('name', '=', 'audit.verified').orderBy('seq').execute()
    expect(events.map(event => JSON.parse(event.dataJson) as { versions: number, intact: boolean })).toMatchObject([{ versions: 2, intact: true }, { versions: 2, intact: false }])
  })
})
