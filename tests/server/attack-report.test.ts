import { afterAll, describe, expect, it } from 'vitest'
import pdfRoute from '#server/api/reports/[id]/pdf.get'
import { closePdfThread } from '#server/pdf/render-pdf'
import { assessStoredStudy } from '#server/services/assess-stored-study'
import { endAdoption } from '#server/services/adopt-set'
import { makeNewVersion } from '#server/services/make-new-version'
import { flushViews } from '#server/services/record-view'
import { viewDeskReport } from '#server/services/view-desk'
import { returnStudy } from '#server/services/take-study'
import { handOverStudy } from '#server/services/hand-over-study'
import { signReport } from '#server/services/sign-report'
import { newVersionSchema, type ReportSnapshot } from '#shared/schemas/report'
import { testContext, type MadeUser } from './helpers'
import { cookieFor, serve } from './http'
import { finishedDraft, meaning, PASSWORD, readingRoom } from './reading-helpers'

const t = await testContext()
const room = await readingRoom(t)
afterAll(closePdfThread)
const frozen = async (reportId: string) => JSON.parse((await t.db.selectFrom('reportVersion').select('snapshotJson').where('reportId', '=', reportId).orderBy('version', 'desc').executeTakeFirstOrThrow()).snapshotJson) as ReportSnapshot

describe('two readers who change one report', () => {
  const next = (changes: object) => newVersionSchema.parse({ kind: 'amended', reason: 'Read again.', password: PASSWORD, meaning, draft: finishedDraft(changes), replaces: 1 })
  it('the second, who has not seen what the first signed, is told instead of undoing it', async () => {
    const { reportId } = await room.signed()
    await makeNewVersion(room.reader, { reportId, ...next({ recommendation: 'A splint at night.' }) })
    await expect(makeNewVersion(room.other, { reportId, ...next({ correlation: 'Fits well.' }) })).rejects.toMatchObject({ code: 'changed-meanwhile', options: { details: { version: 2 } } })
    expect((await frozen(reportId)).draft.recommendation).toBe('A splint at night.')
  })
  it('at the same moment: one version is made', async () => {
    const { reportId } = await room.signed()
    const answers = await Promise.allSettled([makeNewVersion(room.reader, { reportId, ...next({ recommendation: 'A splint.' }) }), makeNewVersion(room.other, { reportId, ...next({ recommendation: 'No splint.' }) })])
    expect(answers.map(answer => answer.status).sort()).toEqual(['fulfilled', 'rejected'])
  })
})

describe('a signed study', () => {
  it('stays judged by what it was signed with, whatever the site does later', async () => {
    const { reportId, studyId } = await room.signed()
    const { policy, assessment } = await frozen(reportId)
    const other = async (handMinimumC: number, distanceUncertaintyMm: number) => await t.db.updateTable('site').set({ handMinimumC, distanceUncertaintyMm }).where('id', '=', room.site.id).execute()
    await other(36, 20)
    const adoption = await t.db.selectFrom('referenceAdoption').select('id').where('endedOn', 'is', null).executeTakeFirstOrThrow()
    await t.db.updateTable('referenceAdoption').set({ endedOn: '2026-01-01' }).where('id', '=', adoption.id).execute()
    const now = await assessStoredStudy(t.context, studyId)
    expect(now.policy).toEqual(policy)
    expect(now.assessment.flagged).toEqual(assessment.flagged)
    expect(assessment.flagged.length).toBeGreaterThan(0)
    await t.db.updateTable('referenceAdoption').set({ endedOn: null }).where('id', '=', adoption.id).execute()
    await other(32, 5)
    await expect(endAdoption(room.director, { id: adoption.id })).resolves.toBeUndefined()
  })
})

describe('who looked', () => {
  it('at the PDF of a report is found under its patient', async () => {
    const { reportId, studyId } = await room.signed()
    const { patientId } = await t.db.selectFrom('study').select('patientId').where('id', '=', studyId).executeTakeFirstOrThrow()
    const user = await t.makeUser({ roles: [{ siteId: room.site.id, role: 'administrator' }] }) as MadeUser
    const { call } = serve(t, [{ method: 'get', path: '/api/reports/:id/pdf', handler: pdfRoute }])
    expect((await call('GET', `/api/reports/${reportId}/pdf`, { cookie: await cookieFor(t, user) })).status).toBe(200)
    await flushViews(t.context)
    expect(await t.db.selectFrom('viewEvent').select(['subject', 'subjectId']).where('patientId', '=', patientId).where('actorId', '=', user.id).execute()).toEqual([{ subject: 'report', subjectId: reportId }])
  })
})

describe('the desk of a referring physician', () => {
  it('shows the report, and not what the laboratory asked itself on the way', async () => {
    const physicianUser = await t.makeUser({ roles: [{ siteId: room.site.id, role: 'referring-physician' }] })
    const physician = await t.makePhysician({ userId: physicianUser.id })
    const studyId = await room.written({}, { physicianId: physician.id })
    await returnStudy(room.reader, { id: studyId, question: 'INTERNAL-QUESTION: was this really the right hand?', runId: null })
    await handOverStudy(room.technologist, { id: studyId, note: '' })
    const { reportId } = await signReport(room.reader, await room.lookedAt(studyId))
    await t.db.updateTable('delivery').set({ state: 'sent' }).where('physicianId', '=', physician.id).execute()
    const view = await viewDeskReport(t.as(physicianUser), { reportId })
    expect(view.report.snapshot.number).toBeTruthy()
    expect(JSON.stringify(view)).not.toContain('INTERNAL-QUESTION')
  })
})
