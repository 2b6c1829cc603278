import { describe, expect, it } from 'vitest'
import { deactivatePerson } from '#server/services/change-person'
import { notePatientCopy } from '#server/services/patient-copy'
import { flushViews, recordView } from '#server/services/record-view'
import { verifyAudit } from '#server/services/verify-audit'
import { exportLedger, makeAccessReport, viewLedger } from '#server/services/view-ledger'
import { setLegalHold } from '#server/services/retention'
import { ledgerExportSchema, ledgerQuerySchema } from '#shared/schemas/user'
import { readingRoom } from './reading-helpers'
import { TEST_NOW, testContext } from './helpers'

/** Who did and who saw what: found by number and day, taken out as a file, told to the patient. */
const t = await testContext()
const room = await readingRoom(t)
const adminUser = await t.makeUser({ name: 'Ada Ledger', roles: ['administrator'] })
const admin = t.as(adminUser)
const rows = async (query: object) => (await viewLedger(admin, [room.site.id], ledgerQuerySchema.parse(query))).rows
const { reportId } = await room.signed()
const report = await t.db.selectFrom('report').innerJoin('study', 'study.id', 'report.studyId').innerJoin('patient', 'patient.id', 'study.patientId').innerJoin('referral', 'referral.id', 'study.referralId')
  .select(['report.number as reportNumber', 'study.number as studyNumber', 'referral.number as referralNumber', 'patient.recordNumber', 'patient.id as patientId']).where('report.id', '=', reportId).executeTakeFirstOrThrow()

describe('the ledger', () => {
  it.each([['recordNumber', 'patient'], ['reportNumber', 'report'], ['studyNumber', 'study'], ['referralNumber', 'referral']] as const)('finds by %s what belongs to that %s, in any case', async (key, subject) => {
    const found = await rows({ number: report[key].toLowerCase(), pageSize: 200 })
    expect(found.length).toBeGreaterThan(0)
    expect(found.some(row => row.subject === subject || key === 'recordNumber')).toBe(true)
    const everything = await rows({ pageSize: 200 })
    expect(found.length).toBeLessThan(everything.length)
  })
  it('finds nothing under a number that does not exist, not everything', async () => {
    expect(await rows({ number: 'NCS-1999-000001' })).toEqual([])
  })
  it('counts the days of the organisation\'s calendar, both included', async () => {
    t.clock.set('2026-12-05T23:30:00.000Z')
    await setLegalHold(admin, { patientId: report.patientId, reason: 'a test' })
    t.clock.set(TEST_NOW)
    // Half past midnight on 6 December in Prague.
    const names = async (from: string, to: string) => (await rows({ from, to, name: 'retention.hold-set' })).length
    expect([await names('2026-12-06', '2026-12-06'), await names('2026-12-05', '2026-12-05'), await names('2026-12-01', '2026-12-31')]).toEqual([1, 0, 1])
  })
  it('views are found the same way, with the name of somebody who was deactivated since', async () => {
    const gone = await t.makeUser({ name: 'Gone Since', roles: ['technologist'] })
    recordView(t.as(gone), { subject: 'report', subjectId: reportId, siteId: room.site.id, patientId: report.patientId })
    await flushViews(t.context)
    await deactivatePerson(admin, gone.id)
    expect(await rows({ chain: 'views', number: report.reportNumber })).toMatchObject([{ actor: 'Gone Since', subject: 'report' }])
    expect((await rows({ chain: 'views', number: report.recordNumber })).map(row => row.actor)).toContain('Gone Since')
  })
  it('as a file is the whole list, and that it left is an event', async () => {
    const all = await rows({ number: report.studyNumber, pageSize: 200 })
    const file = await exportLedger(admin, [room.site.id], ledgerExportSchema.parse({ number: report.studyNumber }))
    expect(file.rows.length).toBe(all.length)
    expect(file.head.length).toBe(file.rows[0]!.length)
    expect(file.left).toBe(0)
    expect((await rows({ name: 'ledger.exported' }))[0]).toMatchObject({ actor: 'Ada Ledger', sentence: `exported ${all.length} rows of the ledger (acts)` })
  })
})

describe('what a patient is told', () => {
  it('is everything that was done with and seen of the record at every site, in order, and nothing of others', async () => {
    const elsewhere = await t.makeSite({ name: 'Elsewhere Clinic' })
    recordView(t.as(await t.makeUser({ name: 'Far Reader', roles: [{ siteId: elsewhere.id, role: 'neurologist' }] })), { subject: 'patient', subjectId: report.patientId, siteId: elsewhere.id, patientId: report.patientId, because: 'care relation' })
    const told = await makeAccessReport(admin, { number: report.recordNumber.toLowerCase(), handedTo: 'the patient, by passport' })
    expect(told.entries.map(entry => entry.at)).toEqual(told.entries.map(entry => entry.at).toSorted())
    expect(told.entries).toContainEqual({ at: TEST_NOW, who: 'Far Reader', what: 'looked at the patient: care relation', siteName: 'Elsewhere Clinic' })
    expect(told.entries.some(entry => entry.what.includes('(report)'))).toBe(true)
    const acts = await t.db.selectFrom('auditEvent').select(eb => eb.fn.countAll<number>().as('n')).where('patientId', '=', report.patientId).where('name', '<>', 'patient.access-report').executeTakeFirstOrThrow()
    const views = await t.db.selectFrom('viewEvent').select(eb => eb.fn.countAll<number>().as('n')).where('patientId', '=', report.patientId).executeTakeFirstOrThrow()
    expect(told.entries.length).toBe(acts.n + views.n)
    expect((await rows({ name: 'patient.access-report' }))[0]!.sentence).toContain('the patient, by passport')
  })
  it('includes what happened under an entry that was merged into this one', async () => {
    const double = await t.makePatient({ mergedInto: report.patientId })
    recordView(admin, { subject: 'patient', subjectId: double.id, patientId: double.id })
    const told = await makeAccessReport(admin, { number: report.recordNumber, handedTo: 'the patient, by passport' })
    expect(told.entries.some(entry => entry.who === 'Ada Ledger' && entry.what === 'looked at the patient')).toBe(true)
  })
  it('needs a number that exists', async () => {
    await expect(makeAccessReport(admin, { number: 'P-999999', handedTo: 'x y z' })).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ path: 'number' }] } })
  })
  it('a copy of the version that stands is noted; one that was replaced is not given out', async () => {
    await notePatientCopy(admin, { reportId, version: 1, handedTo: 'the patient, by passport' })
    expect((await rows({ name: 'report.copy-for-patient' }))[0]).toMatchObject({ subject: 'report', subjectId: reportId, sentence: `gave a copy of ${report.reportNumber}, version 1, to the patient: the patient, by passport` })
    await expect(notePatientCopy(admin, { reportId, version: 2, handedTo: 'nobody' })).rejects.toMatchObject({ code: 'not-found' })
  })
})

it('both chains stay whole through all of it', async () => {
  expect(await verifyAudit(t.context)).toMatchObject({ acts: { intact: true }, views: { intact: true } })
})
