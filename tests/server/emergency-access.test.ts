import { describe, expect, it } from 'vitest'
import * as z from 'zod'
import { openTasks } from '#server/database/queries/tasks'
import { siteOfReferral } from '#server/database/queries/referrals'
import { siteOfStudy } from '#server/database/queries/studies'
import { checkChains } from '#server/services/check-chains'
import { openInEmergency, ownEmergencyAccesses, searchForEmergency } from '#server/services/open-in-emergency'
import { viewStudy } from '#server/services/view-study'
import { flushViews } from '#server/services/record-view'
import { defineApiHandler } from '#server/utils/api-handler'
import { testContext } from './helpers'
import { cookieFor, serve } from './http'
import { readingRoom } from './reading-helpers'

/** A neurologist without a role at the site opens one study for a stated reason; the door shuts by itself. */
const t = await testContext()
const room = await readingRoom(t)
const elsewhere = await t.makeSite()
const outsider = await t.makeUser({ name: 'Nora Outside', roles: [{ siteId: elsewhere.id, role: 'neurologist' }] })
const director = await t.makeUser({ roles: [{ siteId: room.site.id, role: 'medical-director' }] })
const reason = 'The reader is away, the patient is getting weaker'
const id = z.object({ id: z.string() })
const { call } = serve(t, [
  { method: 'get' as const, path: '/api/studies/:id', handler: defineApiHandler({ allow: 'study.read', params: id, siteOf: (db, { params }) => siteOfStudy(db, params.id), handle: ({ context, params }) => viewStudy(context, params.id) }) },
  { method: 'get' as const, path: '/api/write/:id', handler: defineApiHandler({ allow: 'report.write', params: id, siteOf: (db, { params }) => siteOfStudy(db, params.id), handle: () => ({ done: true }) }) },
  { method: 'get' as const, path: '/api/record/:id', handler: defineApiHandler({ allow: 'study.record', params: id, siteOf: (db, { params }) => siteOfStudy(db, params.id), handle: () => ({ done: true }) }) },
  { method: 'get' as const, path: '/api/referrals/:id', handler: defineApiHandler({ allow: 'referral.read', params: id, siteOf: (db, { params }) => siteOfReferral(db, params.id), handle: () => ({ done: true }) }) },
])

describe('a study opened in an emergency', () => {
  it('is shut before, open for four hours, and shut again; nothing else of the site opens', async () => {
    const studyId = await room.handedOver({ urgency: 'urgent', urgencyReason: 'Weakness grows by the day' })
    const other = await room.handedOver()
    const referralId = (await room.study(studyId)).record.referralId
    const cookie = async () => await cookieFor(t, outsider)
    const status = async (path: string) => (await call('GET', path, { cookie: await cookie() })).status
    expect(await status(`/api/studies/${studyId}`)).toBe(404)

    const { expiresAt } = await openInEmergency(t.as(outsider), { studyId, reason })
    expect(Date.parse(expiresAt) - t.context.clock().getTime()).toBe(4 * 3_600_000)
    expect((await call('GET', `/api/studies/${studyId}`, { cookie: await cookie() })).body).toMatchObject({ id: studyId, mayRead: true })
    expect([await status(`/api/write/${studyId}`), await status(`/api/referrals/${referralId}`)]).toEqual([200, 200])
    expect([await status(`/api/studies/${other}`), await status(`/api/record/${studyId}`)]).toEqual([404, 404])
    expect(await ownEmergencyAccesses(t.as(outsider))).toMatchObject([{ studyId, expiresAt }])

    t.clock.minutes(4 * 60 - 1)
    expect(await status(`/api/studies/${studyId}`)).toBe(200)
    t.clock.minutes(2)
    expect(await status(`/api/studies/${studyId}`)).toBe(404)
    expect(await ownEmergencyAccesses(t.as(outsider))).toEqual([])
  })
  it('keeps the reason with each view and in the trail, and asks the medical director to review it', async () => {
    const studyId = await room.handedOver()
    await openInEmergency(t.as(outsider), { studyId, reason })
    t.clock.minutes(5)
    await call('GET', `/api/studies/${studyId}`, { cookie: await cookieFor(t, outsider) })
    await flushViews(t.context)
    const views = await t.db.selectFrom('viewEvent').select('because').where('actorId', '=', outsider.id).where('subjectId', '=', studyId).execute()
    expect(views.map(view => view.because)).toEqual([reason, reason])
    const event = await t.db.selectFrom('auditEvent').selectAll().where('name', '=', 'record.opened-with-reason').orderBy('seq', 'desc').executeTakeFirstOrThrow()
    expect(event).toMatchObject({ actorId: outsider.id, siteId: room.site.id })
    expect(JSON.parse(event.dataJson)).toMatchObject({ because: reason })
    const tasks = await openTasks(t.db, { userId: director.id, holdings: director.holdings })
    const { number } = (await room.study(studyId)).record
    expect(tasks.find(task => task.sentence.includes(number))).toMatchObject({ kind: 'review-emergency-access', link: `/ledger?subjectId=${event.subjectId}` })
    expect(await checkChains(t.context)).toMatchObject({ acts: { intact: true }, views: { intact: true } })
  })
  it('opened twice is opened once, and its end does not move', async () => {
    const studyId = await room.handedOver()
    const first = await openInEmergency(t.as(outsider), { studyId, reason })
    t.clock.minutes(30)
    expect(await openInEmergency(t.as(outsider), { studyId, reason: 'Once more, to be sure of it' })).toEqual(first)
    expect(await t.db.selectFrom('emergencyAccess').select('id').where('studyId', '=', studyId).execute()).toHaveLength(1)
  })
  it('is not for those who read there anyway, nor for a study that was entered in error', async () => {
    const studyId = await room.handedOver()
    await expect(openInEmergency(room.reader, { studyId, reason })).rejects.toMatchObject({ code: 'wrong-state' })
    await t.db.updateTable('study').set({ state: 'entered-in-error' }).where('id', '=', studyId).execute()
    await expect(openInEmergency(t.as(outsider), { studyId, reason })).rejects.toMatchObject({ code: 'not-found' })
  })
  it('gives nothing to another neurologist, nor to one in training', async () => {
    const studyId = await room.handedOver()
    await openInEmergency(t.as(outsider), { studyId, reason })
    const other = await t.makeUser({ roles: [{ siteId: elsewhere.id, role: 'neurologist' }] })
    expect((await call('GET', `/api/studies/${studyId}`, { cookie: await cookieFor(t, other) })).status).toBe(404)
    await t.db.updateTable('user').set({ inTraining: 1 }).where('id', '=', outsider.id).execute()
    expect((await call('GET', `/api/studies/${studyId}`, { cookie: await cookieFor(t, outsider) })).status).toBe(404)
    await t.db.updateTable('user').set({ inTraining: 0 }).where('id', '=', outsider.id).execute()
  })
  it('is found by name or number at other sites only, with identity and state and nothing clinical', async () => {
    const studyId = await room.handedOver()
    const { number } = (await room.study(studyId)).record
    const hits = await searchForEmergency(t.as(outsider), number)
    expect(hits.map(hit => hit.studyId)).toEqual([studyId])
    expect(Object.keys(hits[0]!).sort()).toEqual(['birthDate', 'number', 'patientName', 'recordNumber', 'siteName', 'state', 'stateSince', 'studyId', 'urgency'])
    expect(await searchForEmergency(room.reader, number)).toEqual([])
    const patient = hits[0]!.patientName.split(',')[0]!
    expect((await searchForEmergency(t.as(outsider), patient)).map(hit => hit.studyId)).toContain(studyId)
  })
})
