import type { EventHandler } from 'h3'
import { beforeAll, describe, expect, it } from 'vitest'
import { withdrawDelivery } from '#server/services/change-delivery'
import { changePhysician } from '#server/services/change-physician'
import { flushViews } from '#server/services/record-view'
import { makeNewVersion } from '#server/services/make-new-version'
import { runOutboxOnce } from '#server/services/run-outbox'
import type { DeskPage } from '#shared/schemas/desk'
import type { DeskReportView } from '#server/services/view-desk'
import { newVersionSchema } from '#shared/schemas/report'
import { testContext, type MadeUser } from './helpers'
import { cookieFor, routeFiles, serve } from './http'
import { meaning, PASSWORD, readingRoom } from './reading-helpers'

/** What a signed-in referring physician reaches: the own referrals and reports, through the real routes, and nothing else. */
const t = await testContext()
const room = await readingRoom(t)
const admin = t.as(await t.makeUser({ roles: [{ siteId: room.site.id, role: 'administrator' }] }))
const files = routeFiles().filter(route => route.path !== '/api/auth/**' && route.path !== '/api/**')
const routes = await Promise.all(files.map(async route => ({ ...route, handler: (await import(/* @vite-ignore */ route.file) as { default: EventHandler }).default })))
const { call } = serve(t, routes)

const transport = { send: async (_envelope: unknown, _message: Buffer, beforeLastByte: () => Promise<void>) => {
  await beforeLastByte()
  return { kind: 'accepted' as const }
}, close: () => undefined }
async function mailGoesOut() {
  t.clock.minutes(2)
  await runOutboxOnce(t.context, { transport, owner: 'test' })
}
async function makeReferrer(name: string) {
  const user = await t.makeUser({ name, roles: [{ siteId: room.site.id, role: 'referring-physician' }] })
  const physician = await t.makePhysician({ name, userId: user.id })
  return { user, physician, cookie: await cookieFor(t, user) }
}
type Referrer = Awaited<ReturnType<typeof makeReferrer>>
const desk = async (person: { cookie: string }, query = '') => (await call('GET', `/api/desk/referrals${query}`, { cookie: person.cookie })).body as unknown as DeskPage
const report = async (person: { cookie: string }, id: string, query = '') => await call('GET', `/api/desk/reports/${id}${query}`, { cookie: person.cookie })
const signedFor = async (physicianId: string, copyPhysicianIds: string[] = []) => await room.signed({}, { physicianId, copyPhysicianIds })
const deliveriesOf = async (reportId: string) => await t.db.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').selectAll('delivery').select('version').where('reportId', '=', reportId).orderBy('version').execute()

let [own, other, reads]: Referrer[] = []
let mine: { studyId: string, reportId: string }
let theirs: { studyId: string, reportId: string }
beforeAll(async () => {
  [own, other, reads] = [await makeReferrer('Dr Own Sample'), await makeReferrer('Dr Other Sample'), await makeReferrer('Dr Copy Sample')]
  mine = await signedFor(own!.physician.id)
  theirs = await signedFor(other!.physician.id, [reads!.physician.id])
})

describe('before anything was sent', () => {
  it('the own referral is there with its state, without a report while the hold runs', async () => {
    const page = await desk(own!)
    expect(page.rows.map(row => [row.state, row.copy, row.reports])).toEqual([['answered', false, []]])
    expect(page.practices).toHaveLength(1)
    expect((await report(own!, mine.reportId)).status).toBe(404)
  })
})

describe('after it was sent', () => {
  beforeAll(mailGoesOut)

  it('the own report opens as it was signed, and the look is recorded', async () => {
    const answer = await report(own!, mine.reportId)
    expect(answer.status).toBe(200)
    const { report: view, acknowledgedAt } = answer.body as unknown as DeskReportView
    const stored = await t.db.selectFrom('reportVersion').select('snapshotSha256').where('reportId', '=', mine.reportId).executeTakeFirstOrThrow()
    expect([view.reportId, view.sha256, view.version, acknowledgedAt]).toEqual([mine.reportId, stored.snapshotSha256, 1, null])
    await flushViews(t.context)
    expect(await t.db.selectFrom('viewEvent').select(['subject', 'subjectId', 'patientId']).where('actorId', '=', own!.user.id).execute()).toEqual([{ subject: 'report', subjectId: mine.reportId, patientId: view.band.patientId }])
  })
  it('its PDF opens too', async () => {
    const answer = await call('GET', `/api/desk/reports/${mine.reportId}/pdf`, { cookie: own!.cookie })
    expect([answer.status, answer.headers.get('content-type'), answer.headers.get('cache-control')]).toEqual([200, 'application/pdf', 'no-store'])
  })
  it('another physician\'s report, its PDF and its receipt are not found, like one that does not exist', async () => {
    const [delivery] = await deliveriesOf(theirs.reportId)
    for (const id of [theirs.reportId, 'none']) {
      expect((await report(own!, id)).status).toBe(404)
      expect((await call('GET', `/api/desk/reports/${id}/pdf`, { cookie: own!.cookie })).status).toBe(404)
    }
    for (const id of [delivery!.id, 'none']) expect((await call('POST', `/api/desk/deliveries/${id}/acknowledge`, { cookie: own!.cookie, body: {} })).status).toBe(404)
    expect((await t.db.selectFrom('delivery').select('acknowledgedAt').where('id', '=', delivery!.id).executeTakeFirstOrThrow()).acknowledgedAt).toBeNull()
    const page = await desk(own!)
    expect([page.total, page.rows.flatMap(row => row.reports).map(line => line.reportId)]).toEqual([1, [mine.reportId]])
  })
  it('what looks wrong in an own report reaches its signer, under the name of who is signed in; about another\'s nothing is found', async () => {
    const [delivery] = await deliveriesOf(mine.reportId)
    const [notMine] = await deliveriesOf(theirs.reportId)
    const body = { words: 'The side contradicts what I see.' }
    expect((await call('POST', `/api/desk/deliveries/${notMine!.id}/reply`, { cookie: own!.cookie, body })).status).toBe(404)
    expect((await call('POST', `/api/desk/deliveries/${delivery!.id}/reply`, { cookie: own!.cookie, body: { words: 'short' } })).status).toBe(422)
    expect((await call('POST', `/api/desk/deliveries/${delivery!.id}/reply`, { cookie: own!.cookie, body })).body).toMatchObject({ replies: [{ answeredAt: null }] })
    expect(await t.db.selectFrom('deliveryReply').select(['deliveryId', 'words', 'fromName']).execute()).toEqual([{ deliveryId: delivery!.id, ...body, fromName: 'Dr Own Sample' }])
    expect(await t.db.selectFrom('task').select('ownerId').where('kind', '=', 'recipient-reply').execute()).toEqual([{ ownerId: room.reader.actor.userId }])
    expect(((await report(own!, mine.reportId)).body as unknown as DeskReportView).replies).toHaveLength(1)
  })
  it('who is named for a copy sees the referral as such, with the report', async () => {
    const page = await desk(reads!)
    expect(page.rows.map(row => [row.copy, row.reports.map(line => line.reportId)])).toEqual([[true, [theirs.reportId]]])
    expect((await report(reads!, theirs.reportId)).status).toBe(200)
  })
  it('the receipt is the own one and counts once', async () => {
    const [delivery] = await deliveriesOf(mine.reportId)
    for (let press = 0; press < 2; press++) expect((await call('POST', `/api/desk/deliveries/${delivery!.id}/acknowledge`, { cookie: own!.cookie, body: {} })).status).toBe(200)
    expect((await deliveriesOf(mine.reportId))[0]).toMatchObject({ state: 'acknowledged' })
    const events = await t.db.selectFrom('auditEvent').select(['actorId']).where('name', '=', 'delivery.acknowledged').where('subjectId', '=', delivery!.id).execute()
    expect(events).toEqual([{ actorId: own!.user.id }])
    expect((await desk(own!)).rows[0]!.reports[0]!.acknowledgedAt).not.toBeNull()
  })
  it('an acknowledged report that could not be mailed needs no delivery by hand any more', async () => {
    const unverified = await makeReferrer('Dr Unmailed Sample')
    await t.db.updateTable('physician').set({ emailVerifiedAt: null }).where('id', '=', unverified.physician.id).execute()
    const signed = await room.signed({ resolved: [{ key: 'recipient/Dr Unmailed Sample', reason: 'Reads at the desk.' }] }, { physicianId: unverified.physician.id, copyPhysicianIds: [] })
    const [delivery] = await deliveriesOf(signed.reportId)
    expect(delivery!.state).toBe('given-up')
    expect((await call('POST', `/api/desk/deliveries/${delivery!.id}/acknowledge`, { cookie: unverified.cookie, body: {} })).status).toBe(200)
    expect((await deliveriesOf(signed.reportId))[0]!.state).toBe('acknowledged')
    expect(await t.db.selectFrom('task').select('id').where('subjectId', '=', delivery!.id).where('doneAt', 'is', null).execute()).toEqual([])
  })
})

describe('a later version', () => {
  it('is shown once it was sent; the earlier one opens as superseded', async () => {
    const { version } = await makeNewVersion(room.reader, { reportId: mine.reportId, ...newVersionSchema.parse({ kind: 'appended', reason: 'An addition', password: PASSWORD, meaning, draft: (await latestDraft()) }) })
    expect(version).toBe(2)
    expect(((await report(own!, mine.reportId)).body as unknown as DeskReportView).report).toMatchObject({ version: 1, superseded: true, versions: [{ version: 1 }] })
    expect((await report(own!, mine.reportId, '?version=2')).status).toBe(404)
    await mailGoesOut()
    expect(((await report(own!, mine.reportId)).body as unknown as DeskReportView).report).toMatchObject({ version: 2, superseded: false })
    expect(((await report(own!, mine.reportId, '?version=1')).body as unknown as DeskReportView).report).toMatchObject({ version: 1, superseded: true })
    expect((await desk(own!)).rows[0]!.reports.map(line => line.version)).toEqual([2])
  })
  async function latestDraft() {
    const row = await t.db.selectFrom('reportVersion').select('snapshotJson').where('reportId', '=', mine.reportId).orderBy('version', 'desc').executeTakeFirstOrThrow()
    const { draft } = JSON.parse(row.snapshotJson) as { draft: { correlation: string } }
    return { ...draft, correlation: `${draft.correlation} Added later.` }
  }
})

describe('what closes the desk', () => {
  it('a withdrawn delivery is no longer found', async () => {
    const wrong = await makeReferrer('Dr Wrong Sample')
    const signed = await signedFor(wrong.physician.id)
    await mailGoesOut()
    expect((await report(wrong, signed.reportId)).status).toBe(200)
    await withdrawDelivery(admin, { id: (await deliveriesOf(signed.reportId))[0]!.id, reason: 'Sent to the wrong practice' })
    expect((await report(wrong, signed.reportId)).status).toBe(404)
    expect((await desk(wrong)).rows[0]!.reports).toEqual([])
  })
  it('who left the practice sees nothing from that day on', async () => {
    const leaving = await makeReferrer('Dr Leaving Sample')
    const signed = await signedFor(leaving.physician.id)
    await mailGoesOut()
    expect((await desk(leaving)).total).toBe(1)
    await changePhysician(admin, leaving.physician.id, { leftOn: '2026-12-02' })
    expect(await desk(leaving)).toMatchObject({ total: 0, rows: [], practices: [] })
    expect((await report(leaving, signed.reportId)).status).toBe(404)
  })
  it('an account with the role and no entry in the directory sees nothing', async () => {
    const nobody: MadeUser = await t.makeUser({ roles: [{ siteId: room.site.id, role: 'referring-physician' }] })
    expect(await desk({ cookie: await cookieFor(t, nobody) })).toMatchObject({ total: 0, practices: [] })
  })
  it('drafts of the laboratory and its reasons of other states stay inside', async () => {
    const person = await makeReferrer('Dr Draft Sample')
    await t.makeReferral({ siteId: room.site.id, physicianId: person.physician.id, state: 'draft' })
    await t.makeReferral({ siteId: room.site.id, physicianId: person.physician.id, state: 'returned', stateReason: 'Which hand is worse?' })
    await t.makeReferral({ siteId: room.site.id, physicianId: person.physician.id, state: 'accepted', stateReason: 'internal' })
    expect((await desk(person)).rows.map(row => [row.state, row.reason]).sort()).toEqual([['accepted', ''], ['returned', 'Which hand is worse?']])
    expect((await desk(person, '?show=answered')).total).toBe(0)
  })
})

describe('every other room', () => {
  const open = /^\/api\/(?:desk|profile|me$|health$|acknowledge|letters|first-run$|set-password$|forgotten-password$)/
  it.each(routes.filter(route => !open.test(route.path)))('$method $path is refused', async ({ method, path }) => {
    const address = path.replaceAll(/:\w+/g, mine.reportId)
    const answer = await call(method.toUpperCase(), address, { cookie: own!.cookie, body: method === 'get' ? undefined : {} })
    expect(answer.status).toBe(403)
  })
})
