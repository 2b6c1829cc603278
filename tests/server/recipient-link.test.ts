import type { EventHandler } from 'h3'
import { simpleParser } from 'mailparser'
import { afterAll, beforeEach, describe, expect, it } from 'vitest'
import { closePdfThread } from '#server/pdf/render-pdf'
import { dispatchPage } from '#server/database/queries/deliveries'
import { openTasks } from '#server/database/queries/tasks'
import { answerReply, repliesOfReport } from '#server/services/answer-reply'
import { resolveDelivery, withdrawDelivery } from '#server/services/change-delivery'
import { changePractice } from '#server/services/change-practice'
import { finishTask } from '#server/services/finish-task'
import { makeNewVersion } from '#server/services/make-new-version'
import { renewLink } from '#server/services/renew-link'
import { runOutboxOnce } from '#server/services/run-outbox'
import { verifyAudit } from '#server/services/verify-audit'
import { TEST_NOW, testContext } from './helpers'
import { routeFiles, serve } from './http'
import { finishedDraft, meaning, PASSWORD, readingRoom } from './reading-helpers'

/** What somebody with the link of a mail can do, and what comes of it inside. */
const PASSPHRASE = 'seven invented words that nobody has used'
const t = await testContext()
const room = await readingRoom(t)
const admin = t.as(await t.makeUser({ roles: [{ siteId: room.site.id, role: 'administrator' }] }))
const routes = await Promise.all(routeFiles().filter(route => route.path.startsWith('/api/acknowledge/')).map(async route => ({ ...route, handler: (await import(/* @vite-ignore */ route.file) as { default: EventHandler }).default })))
const { call } = serve(t, routes)
afterAll(closePdfThread)
beforeEach(() => t.clock.set(TEST_NOW))

const received: Buffer[] = []
const transport = { send: async (_envelope: unknown, message: Buffer, beforeLastByte: () => Promise<void>) => {
  await beforeLastByte()
  received.push(message)
  return { kind: 'accepted' as const }
}, close: () => undefined }
const round = async () => {
  t.clock.minutes(2)
  await runOutboxOnce(t.context, { transport, owner: 'test' })
}
async function mailed(collected = true) {
  const practice = await t.makePractice()
  if (collected) await changePractice(admin, practice.id, { deliveryMethod: 'collection-link' })
  const physician = await t.makePhysician({ practiceId: practice.id })
  const { reportId } = await room.signed({}, { physicianId: physician.id, copyPhysicianIds: [] })
  const { id } = await t.db.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').select('delivery.id').where('reportId', '=', reportId).executeTakeFirstOrThrow()
  await round()
  const mail = await simpleParser(received.at(-1)!)
  return { id, reportId, mail, token: /acknowledge\/(\S+)/.exec(mail.text ?? '')![1]!, physician }
}
const post = (token: string, what: string, body: object = {}) => call('POST', `/api/acknowledge/${token}/${what}`, { body })
const openKinds = async (subjectId: string) => (await t.db.selectFrom('task').select('kind').where('subjectId', '=', subjectId).where('doneAt', 'is', null).execute()).map(task => task.kind)
const events = async (subjectId: string) => (await t.db.selectFrom('auditEvent').select('name').where('subjectId', '=', subjectId).orderBy('seq').execute()).map(event => event.name)

describe('"I think this is wrong"', () => {
  const words = 'The side in the impression does not fit what the patient says.'
  it('is promised by the mail, needs no account, and reaches the signer as a task about that version', async () => {
    const made = await mailed(false)
    expect(made.mail.text).toContain('it reaches the neurologist who signed')
    const answer = await post(made.token, 'reply', { words, fromName: 'Dr A. Reader' })
    expect([answer.status, answer.body.replies]).toEqual([200, [{ at: expect.any(String), answeredAt: null }]])
    expect(JSON.stringify(answer.body)).not.toContain('impression')
    const [task] = (await openTasks(t.db, { userId: room.reader.actor.userId!, holdings: room.reader.actor.holdings })).filter(row => row.kind === 'recipient-reply' && row.link?.includes(made.reportId))
    expect(task).toMatchObject({ link: `/reports/${made.reportId}?version=1#replies`, ownerName: room.reader.actor.label })
    expect(task!.sentence).toContain('version 1')
    expect(task!.sentence).not.toContain('impression')
    expect(await repliesOfReport(t.context, made.reportId)).toMatchObject([{ words, fromName: 'Dr A. Reader', version: 1, recipient: made.physician.name, answeredAt: null }])
    expect(await events(made.id)).toContain('delivery.replied')
  })
  it('is answered once; the task is done with it, and the page says that, not what', async () => {
    const made = await mailed()
    await post(made.token, 'reply', { words, fromName: '' })
    const [reply] = await repliesOfReport(t.context, made.reportId)
    const task = await t.db.selectFrom('task').selectAll().where('subjectId', '=', reply!.id).executeTakeFirstOrThrow()
    await expect(finishTask(room.reader, { id: task.id, resolution: '' })).rejects.toMatchObject({ code: 'wrong-state' })
    await answerReply(room.other, { id: reply!.id, answer: 'Telephoned: the left hand was meant. Version 2 follows.' })
    await expect(answerReply(room.reader, { id: reply!.id, answer: 'again' })).rejects.toMatchObject({ code: 'wrong-state' })
    expect(await openKinds(reply!.id)).toEqual([])
    const page = (await call('GET', `/api/acknowledge/${made.token}`)).body
    expect(page.replies).toEqual([{ at: expect.any(String), answeredAt: expect.any(String) }])
    expect(JSON.stringify(page)).not.toContain('left hand')
    expect((await repliesOfReport(t.context, made.reportId))[0]).toMatchObject({ answeredBy: room.other.actor.label })
  })
  it('goes to the neurologists of the site when the signer is no longer there', async () => {
    const made = await mailed()
    await t.db.updateTable('user').set({ deactivatedAt: TEST_NOW }).where('id', '=', room.reader.actor.userId!).execute()
    await post(made.token, 'reply', { words })
    await t.db.updateTable('user').set({ deactivatedAt: null }).where('id', '=', room.reader.actor.userId!).execute()
    const [reply] = await repliesOfReport(t.context, made.reportId)
    expect(await t.db.selectFrom('task').select(['ownerId', 'ownerRole']).where('subjectId', '=', reply!.id).executeTakeFirst()).toEqual({ ownerId: null, ownerRole: 'neurologist' })
  })
  it('needs words, and is taken five times a day for one delivery', async () => {
    const made = await mailed()
    const short = await post(made.token, 'reply', { words: 'no' })
    expect([short.status, short.body.fields]).toEqual([422, [{ path: 'words', message: expect.stringContaining('sentence') }]])
    const answers: number[] = []
    for (let n = 0; n < 6; n++) answers.push((await post(made.token, 'reply', { words: `${words} ${n}` })).status)
    expect(answers).toEqual([200, 200, 200, 200, 200, 429])
    expect((await post('x'.repeat(43), 'reply', { words })).status).toBe(404)
  })
})

describe('a link that is too old', () => {
  it('is asked for and renewed by an administrator: the same link, 30 more days, told by mail', async () => {
    const made = await mailed()
    t.clock.minutes(31 * 1440)
    expect((await call('GET', `/api/acknowledge/${made.token}`)).body).toMatchObject({ collect: false, expired: true })
    expect((await post(made.token, 'collect', { passphrase: PASSPHRASE, collectorId: made.physician.id })).status).toBe(410)
    expect((await post(made.token, 'ask-link')).body).toEqual({ asked: true })
    await post(made.token, 'ask-link')
    expect((await openKinds(made.id)).filter(kind => kind === 'link-asked')).toHaveLength(1)
    await renewLink(admin, made.id)
    expect((await openKinds(made.id)).filter(kind => kind === 'link-asked')).toEqual([])
    expect((await post(made.token, 'collect', { passphrase: PASSPHRASE, collectorId: made.physician.id })).status).toBe(200)
    await round()
    const mail = await simpleParser(received.at(-1)!)
    expect([mail.subject, mail.attachments]).toEqual([expect.stringContaining('works again'), []])
    expect(mail.text).toContain(`/acknowledge/${made.token}`)
    t.clock.minutes(31 * 1440)
    expect((await post(made.token, 'collect', { passphrase: PASSPHRASE, collectorId: made.physician.id })).status).toBe(410)
    expect(await events(made.id)).toEqual(expect.arrayContaining(['delivery.link-asked', 'delivery.link-renewed', 'delivery.page-opened', 'delivery.collected']))
  })
  it('asking reveals nothing: a link that nobody knows, one that works and one that was withdrawn are answered alike, and nothing comes of it', async () => {
    const [works, gone] = [await mailed(), await mailed()]
    await withdrawDelivery(admin, { id: gone.id, reason: 'Wrong practice' })
    const answers = await Promise.all([works.token, gone.token, 'y'.repeat(43), 'short'].map(token => post(token, 'ask-link')))
    expect(answers.map(answer => [answer.status, answer.body])).toEqual(Array.from({ length: 4 }, () => [200, { asked: true }]))
    expect([...await openKinds(works.id), ...await openKinds(gone.id)].filter(kind => kind === 'link-asked')).toEqual([])
  })
  it('works for 30 days after it was sent again, however long ago it was renewed', async () => {
    const made = await mailed()
    await renewLink(admin, made.id)
    t.clock.minutes(40 * 1440)
    await resolveDelivery(admin, { id: made.id, outcome: 'send-again', note: 'They never saw it.' })
    await round()
    expect((await call('GET', `/api/acknowledge/${made.token}`)).body).toMatchObject({ collect: true, expired: false })
    const [row] = (await dispatchPage(t.db, { siteIds: [room.site.id] }, { page: 1, pageSize: 50 })).rows.filter(each => each.id === made.id)
    expect(Date.parse(row!.linkUntil!)).toBeGreaterThan(t.context.clock().getTime())
  })
  it('is not renewed when a later version stands, when it was attached, or when it was withdrawn', async () => {
    const [old, attached, gone] = [await mailed(), await mailed(false), await mailed()]
    await makeNewVersion(room.reader, { reportId: old.reportId, kind: 'corrected', reason: 'The side was wrong', password: PASSWORD, meaning, draft: finishedDraft({ recommendation: 'Splint at night.' }) })
    await withdrawDelivery(admin, { id: gone.id, reason: 'Wrong practice' })
    for (const [id, code] of [[old.id, 'not-valid'], [attached.id, 'not-valid'], [gone.id, 'wrong-state']] as const) await expect(renewLink(admin, id)).rejects.toMatchObject({ code })
    expect((await call('GET', `/api/acknowledge/${old.token}`)).body).toMatchObject({ superseded: true, collect: false, expired: false })
  })
})

it('every opening is in the trail; after 60 in a quarter of an hour the page has to wait', async () => {
  const made = await mailed()
  const answers: number[] = []
  for (let n = 0; n < 61; n++) answers.push((await call('GET', `/api/acknowledge/${made.token}`)).status)
  expect([answers.slice(0, 60).every(status => status === 200), answers[60]]).toEqual([true, 429])
  expect((await events(made.id)).filter(name => name === 'delivery.page-opened')).toHaveLength(60)
})

it('the trail of all this is intact', async () => {
  expect(await verifyAudit(t.context)).toMatchObject({ acts: { intact: true } })
})
