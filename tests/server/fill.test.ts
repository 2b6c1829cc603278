import { writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { describe, expect, it } from 'vitest'
import { listReferrals } from '#server/database/queries/referral-list'
import { loadStudy } from '#server/database/queries/studies'
import { nextNumber } from '#server/services/next-number'
import { recordAuditEvent } from '#server/services/record-audit-event'
import { checkChains } from '#server/services/check-chains'
import { verifyDatabase } from '#server/services/verify-database'
import { verifyReports } from '#server/services/verify-reports'
import { auditSentence } from '#shared/audit-events'
import { reportBlocks } from '#shared/report/index'
import type { ReportSnapshot } from '#shared/schemas/report'
import { fillFolder } from '../../scripts/fill/fill-folder'
import { policies } from '#shared/policies/index'
import { clinic } from './bench-helpers'
import { TEST_NOW, testContext } from './helpers'

const STUDIES = 60
const BEFORE = 3

/** A clinic of the tests, as a demonstration, with a few acts of its own. */
async function demonstration() {
  const t = await testContext()
  const c = await clinic(t)
  await c.adopt('aanem-ndtf-2016')
  await t.makeUser({ roles: [{ siteId: c.site.id, role: 'neurologist' }] })
  for (let index = 0; index < BEFORE; index++) await c.accepted()
  const keyFile = join(t.dataDir, 'of-the-test.key')
  writeFileSync(keyFile, Buffer.alloc(32, 7), { mode: 0o600 })
  const fill = () => fillFolder({ settings: t.settings, keyFile, studies: STUDIES, seed: 1, today: new Date(TEST_NOW) })
  return { t, c, fill, setDemonstration: (on: 0 | 1) => t.db.updateTable('organisation').set({ demonstration: on }).execute() }
}

describe('a filled demonstration', async () => {
  const { t, c, fill, setDemonstration } = await demonstration()
  await setDemonstration(1)
  await fill()

  it('holds so many finished studies more, and the worklist counts them', async () => {
    const page = await listReferrals(t.db, { siteIds: [c.site.id], states: [], search: '', sort: 'number', direction: 'asc', page: 1, pageSize: 50, clocks: policies.clocks.initial, now: new Date('2026-12-02T09:00:00Z') })
    expect(page).toMatchObject({ total: STUDIES + BEFORE, counts: { answered: STUDIES, accepted: BEFORE } })
    expect(page.rows).toHaveLength(50)
  })

  it('passes every check: hashes, both chains, foreign keys, guards', async () => {
    expect(await verifyReports(t.db)).toEqual({ versions: STUDIES, pdfs: 0, altered: [] })
    expect(await checkChains(t.context)).toMatchObject({ acts: { intact: true }, views: { intact: true } })
    expect(await verifyDatabase(t.db)).toEqual([])
  })

  it('says in one event how many were filled', async () => {
    const events = await t.db.selectFrom('auditEvent').select(['name', 'dataJson']).where('name', '=', 'demonstration.filled').execute()
    expect(events.map(({ name, dataJson }) => auditSentence(name, JSON.parse(dataJson)))).toEqual([`filled the demonstration with ${STUDIES} invented studies`])
  })

  it('goes on where it ended: numbers, trail', async () => {
    const last = await t.db.selectFrom('patient').select(eb => eb.fn.max('recordNumber').as('last')).executeTakeFirstOrThrow()
    const next = await t.db.transaction().execute(trx => nextNumber(trx, 'patient', 2026))
    expect(Number(next.slice(2))).toBe(Number(last.last.slice(2)) + 1)
    await t.db.transaction().execute(trx => recordAuditEvent(t.context, trx, { name: 'role.granted', subject: 'user', subjectId: 'u', data: { role: 'technologist' } }))
    expect((await checkChains(t.context)).acts.intact).toBe(true)
    await fill()
    expect(await verifyReports(t.db)).toMatchObject({ versions: 2 * STUDIES, altered: [] })
  })

  it('has frozen in each report what stands in its study', async () => {
    const rows = await t.db.selectFrom('reportVersion').innerJoin('report', 'report.id', 'reportVersion.reportId').innerJoin('study', 'study.id', 'report.studyId').innerJoin('patient', 'patient.id', 'study.patientId')
      .select(['report.studyId', 'report.number', 'snapshotJson', 'recordNumber', 'familyName', 'summaryJson', 'studyDate']).execute()
    for (const row of rows) {
      const snapshot = JSON.parse(row.snapshotJson) as ReportSnapshot
      const stored = (await loadStudy(t.db, row.studyId))!
      expect(snapshot.study).toEqual(stored.study)
      expect(snapshot.policy).toEqual(stored.policy)
      expect(snapshot).toMatchObject({ number: row.number, patient: { recordNumber: row.recordNumber, familyName: row.familyName } })
      expect(snapshot.assessment.flagged).toHaveLength((JSON.parse(row.summaryJson!) as { flagged: number }).flagged)
      expect(snapshot.assessment.person.ageYears).toBe(ageOn(stored.study.patient.birthDate, row.studyDate))
      expect(row.snapshotJson).not.toContain('@@')
    }
  })

  it('gives reports that can be drawn', async () => {
    const row = await t.db.selectFrom('reportVersion').selectAll().executeTakeFirstOrThrow()
    const blocks = reportBlocks({ snapshot: JSON.parse(row.snapshotJson) as ReportSnapshot, sha256: row.snapshotSha256, auditHead: row.auditHead, preliminary: false, versions: [] })
    expect(JSON.stringify(blocks)).toContain('µV')
  })
})

const ageOn = (birthDate: string, day: string) => Number(day.slice(0, 4)) - Number(birthDate.slice(0, 4)) - (day.slice(5) < birthDate.slice(5) ? 1 : 0)

it('a data folder that is not a demonstration is left as it is', async () => {
  const { t, fill, setDemonstration } = await demonstration()
  await setDemonstration(0)
  await expect(fill()).rejects.toThrow('The data folder is not a demonstration. Nothing was filled.')
  expect(await t.db.selectFrom('reportVersion').select('id').execute()).toEqual([])
})
