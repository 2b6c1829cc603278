import { simpleParser } from 'mailparser'
import { afterAll, beforeEach, describe, expect, it } from 'vitest'
import type { MailTransport } from '#server/email/transport'
import { closePdfThread } from '#server/pdf/render-pdf'
import { acknowledgeDelivery } from '#server/services/acknowledge-delivery'
import { openLink } from '#server/services/answer-link'
import { withdrawDelivery } from '#server/services/change-delivery'
import { finishTask } from '#server/services/finish-task'
import { changeIncident, closeIncident, listIncidents, viewIncident } from '#server/services/incidents'
import { makeNewVersion } from '#server/services/make-new-version'
import { runOutboxOnce } from '#server/services/run-outbox'
import { sendToRecipient } from '#server/services/send-to-recipient'
import { verifyAudit } from '#server/services/verify-audit'
import { incidentSchema, missingForClosing, type IncidentInput, type IncidentView } from '#shared/schemas/incident'
import { TEST_NOW, testContext } from './helpers'
import { finishedDraft, meaning, PASSWORD, readingRoom } from './reading-helpers'

/** A report that went to the wrong one of two namesakes. */
const t = await testContext()
const room = await readingRoom(t)
afterAll(closePdfThread)
beforeEach(() => t.clock.set(TEST_NOW))

const taken: Buffer[] = []
const transport: MailTransport = { send: async (_envelope, message, beforeLastByte) => {
  await beforeLastByte()
  taken.push(message)
  return { kind: 'accepted' }
}, close: () => undefined }
const round = async () => {
  t.clock.minutes(2)
  await runOutboxOnce(t.context, { transport, owner: 'test' })
}
const namesakes = async () => ({ wrong: await t.makePhysician({ name: 'Dr Ann Twin' }), right: await t.makePhysician({ name: 'Dr Ann Twin' }), copy: await t.makePhysician() })
const deliveriesOf = (reportId: string) => t.db.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').select(['delivery.id', 'delivery.physicianId', 'delivery.state', 'version']).where('reportId', '=', reportId).orderBy('version').execute()
async function sentWrong() {
  const people = await namesakes()
  const { reportId, studyId } = await room.signed({}, { physicianId: people.wrong.id, copyPhysicianIds: [people.copy.id] })
  await round()
  const wrong = (await deliveriesOf(reportId)).find(row => row.physicianId === people.wrong.id)!
  return { ...people, reportId, studyId, deliveryId: wrong.id, token: await tokenOf(wrong.id) }
}
async function tokenOf(deliveryId: string): Promise<string> {
  const { messageId } = await t.db.selectFrom('outboxMail').select('messageId').where('deliveryId', '=', deliveryId).executeTakeFirstOrThrow()
  for (const raw of taken) {
    const mail = await simpleParser(raw)
    if (mail.messageId === messageId) return /acknowledge\/([\w-]+)/.exec(mail.text!)![1]!
  }
  throw new Error('No such mail left.')
}
const withdrawn = async () => {
  const made = await sentWrong()
  const { incidentId } = await withdrawDelivery(room.admin, { id: made.deliveryId, reason: 'The other Dr Twin asked for it' })
  return { ...made, incidentId: incidentId! }
}
const inputOf = (view: IncidentView): IncidentInput => incidentSchema.parse(view)
const completed = (view: IncidentView): IncidentInput => ({ ...inputOf(view), contactName: 'The practice manager', contactAt: view.awareAt, contactMeans: 'telephone', contactWords: 'Deleted unread, says so by letter.', deletionConfirmed: true, decision: 'nobody', decisionReason: 'Deleted unopened, confirmed in writing.' })

describe('the incident record', () => {
  it('is filled in from the log: what, who, whether it was seen, what was done, with both clocks', async () => {
    const made = await sentWrong()
    await openLink(t.context, { token: made.token, address: '192.0.2.7' })
    await acknowledgeDelivery(t.context, { token: made.token, address: '192.0.2.7' })
    t.clock.minutes(30)
    const { incidentId } = await withdrawDelivery(room.admin, { id: made.deliveryId, reason: 'The other Dr Twin asked for it' })
    const view = await viewIncident(room.admin, incidentId!)
    expect(view).toMatchObject({ reason: 'The other Dr Twin asked for it', recipient: 'Dr Ann Twin', viewed: 'yes', openedBy: room.admin.actor.label, closedAt: null })
    expect(view.dataNature).toContain('AES-256')
    expect(view.whoGotIt).toContain(made.wrong.email)
    expect(view.viewedWords).toMatch(/accepted by the mail server 2 December 2026, \d\d:\d\d.*its page was opened once.*receipt was acknowledged once/s)
    expect(view.mitigation).toContain('the link of the mail is closed')
    expect(Date.parse(view.authorityDueAt) - Date.parse(view.awareAt)).toBe(72 * 3_600_000)
    expect(Date.parse(view.individualsDueAt) - Date.parse(view.awareAt)).toBe(60 * 24 * 3_600_000)
    expect(view.log.map(line => line.sentence).join('\n')).toMatch(/opened the page[^]*acknowledged[^]*withdrew the delivery/)
  })
  it('opening the page alone leaves it open whether it was seen', async () => {
    const made = await sentWrong()
    await openLink(t.context, { token: made.token, address: '192.0.2.7' })
    const { incidentId } = await withdrawDelivery(room.admin, { id: made.deliveryId, reason: 'Wrong practice' })
    expect((await viewIncident(room.admin, incidentId!)).viewed).toBe('unknown')
  })
  it('says what else went to the same address', async () => {
    const first = await sentWrong()
    const second = await room.signed({}, { physicianId: first.wrong.id, copyPhysicianIds: [] })
    await round()
    const { incidentId } = await withdrawDelivery(room.admin, { id: first.deliveryId, reason: 'Wrong practice' })
    const { others } = await viewIncident(room.admin, incidentId!)
    expect(others.map(other => other.reportId)).toEqual([second.reportId])
    expect(others[0]!.patientName).toMatch(/, /)
  })
  it('none is opened for what had not left', async () => {
    const { wrong } = await namesakes()
    const { reportId } = await room.signed({}, { physicianId: wrong.id, copyPhysicianIds: [] })
    const [delivery] = await deliveriesOf(reportId)
    expect(await withdrawDelivery(room.admin, { id: delivery!.id, reason: 'Wrong practice' })).toEqual({ incidentId: null })
  })
  it('is written, and what stood there before is in the trail; two who write at once do not overwrite each other', async () => {
    const { incidentId } = await withdrawn()
    const view = await viewIncident(room.admin, incidentId)
    const change = (contactWords: string) => changeIncident(room.admin, { id: incidentId, revision: view.revision, ...inputOf(view), contactWords })
    const results = await Promise.allSettled([change('They will delete it.'), change('Nobody answers.')])
    expect(results.map(result => result.status).toSorted()).toEqual(['fulfilled', 'rejected'])
    const events = await t.db.selectFrom('auditEvent').select('dataJson').where('subjectId', '=', view.deliveryId).where('name', '=', 'incident.changed').execute()
    expect(events.map(event => JSON.parse(event.dataJson))).toMatchObject([{ changes: [{ field: 'contactWords', before: '' }] }])
  })
  it.each<[string, Partial<IncidentInput>, string]>([
    ['becoming aware before it was sent', { awareAt: '2026-12-01T09:00:00.000Z' }, 'awareAt'],
    ['becoming aware in the future', { awareAt: '2026-12-24T09:00:00.000Z' }, 'awareAt'],
    ['a contact in the future', { contactAt: '2026-12-24T09:00:00.000Z' }, 'contactAt'],
  ])('%s is refused', async (_what, wrong, path) => {
    const { incidentId } = await withdrawn()
    const view = await viewIncident(room.admin, incidentId)
    await expect(changeIncident(room.admin, { id: incidentId, revision: view.revision, ...inputOf(view), ...wrong })).rejects.toMatchObject({ options: { fields: [{ path }] } })
  })
  it('the task follows the moment of becoming aware, and cannot be ticked off past the record', async () => {
    const { incidentId } = await withdrawn()
    t.clock.minutes(240)
    const view = await viewIncident(room.admin, incidentId)
    const awareAt = new Date(Date.parse(view.awareAt) + 3_600_000).toISOString()
    await changeIncident(room.admin, { id: incidentId, revision: view.revision, ...inputOf(view), awareAt })
    const task = await t.db.selectFrom('task').selectAll().where('subjectId', '=', incidentId).executeTakeFirstOrThrow()
    expect(Date.parse(task.dueAt!)).toBe(Date.parse(awareAt) + 72 * 3_600_000)
    await expect(finishTask(room.admin, { id: task.id, resolution: 'done' })).rejects.toMatchObject({ code: 'wrong-state' })
  })
  it('is closed by a named person when it is complete, and never changes again', async () => {
    const { incidentId } = await withdrawn()
    const view = await viewIncident(room.admin, incidentId)
    await expect(closeIncident(room.admin, { id: incidentId, revision: view.revision })).rejects.toMatchObject({ code: 'not-valid' })
    const { revision } = await changeIncident(room.admin, { id: incidentId, revision: view.revision, ...completed(view) })
    await closeIncident(room.admin, { id: incidentId, revision })
    expect(await viewIncident(room.admin, incidentId)).toMatchObject({ closedBy: room.admin.actor.label, decision: 'nobody' })
    expect(await t.db.selectFrom('task').select('id').where('subjectId', '=', incidentId).where('doneAt', 'is', null).execute()).toEqual([])
    await expect(changeIncident(room.admin, { id: incidentId, revision: revision + 1, ...completed(view), mitigation: 'more' })).rejects.toMatchObject({ code: 'wrong-state' })
    await expect(closeIncident(room.admin, { id: incidentId, revision: revision + 1 })).rejects.toMatchObject({ code: 'wrong-state' })
  })
  it('everything that is missing is named, and a decision to tell needs its moment', () => {
    const empty = incidentSchema.parse({ awareAt: TEST_NOW, viewed: 'unknown' })
    expect(missingForClosing(empty).map(field => field.path)).toEqual(['dataNature', 'whoGotIt', 'viewedWords', 'mitigation', 'contactName', 'contactAt', 'contactMeans', 'decision', 'decisionReason'])
    expect(missingForClosing({ ...empty, decision: 'authority' }).map(field => field.path)).toContain('toldAt')
  })
  it('is listed for those of its site, open ones first, and for nobody else', async () => {
    const { incidentId } = await withdrawn()
    expect((await listIncidents(room.admin, [room.site.id]))[0]!.closedAt).toBeNull()
    expect((await listIncidents(room.admin, [room.site.id])).map(row => row.id)).toContain(incidentId)
    const elsewhere = t.as(await t.makeUser({ roles: [{ siteId: (await t.makeSite()).id, role: 'administrator' }] }))
    await expect(viewIncident(elsewhere, incidentId)).rejects.toMatchObject({ code: 'not-found' })
  })
})

describe('the right one', () => {
  it('gets it through the same hold, stands in the referral from then on, and the correction reaches all who had version 1 but not the wrong one', async () => {
    const made = await withdrawn()
    const before = await t.db.selectFrom('reportVersion').selectAll().where('reportId', '=', made.reportId).executeTakeFirstOrThrow()
    await sendToRecipient(room.admin, { reportId: made.reportId, physicianId: made.right.id, reason: 'The right Dr Twin', insteadOf: made.wrong.id })
    expect((await deliveriesOf(made.reportId)).find(row => row.physicianId === made.right.id)!.state).toBe('held')
    await round()
    const second = await makeNewVersion(room.reader, { reportId: made.reportId, kind: 'corrected', reason: 'The recipient was wrong', password: PASSWORD, meaning, draft: finishedDraft({ recommendation: 'Splint at night.' }) })
    await round()
    const got = (version: number) => deliveriesOf(made.reportId).then(rows => rows.filter(row => row.version === version && row.state === 'sent').map(row => row.physicianId).toSorted())
    expect([await got(1), await got(2)]).toEqual([[made.right.id, made.copy.id].toSorted(), [made.right.id, made.copy.id].toSorted()])
    const versions = await t.db.selectFrom('reportVersion').selectAll().where('reportId', '=', made.reportId).orderBy('version').execute()
    expect(versions[0]).toEqual(before)
    expect([second.version, JSON.parse(versions[1]!.snapshotJson).referral.physician]).toMatchObject([2, { name: 'Dr Ann Twin', practiceName: (await t.db.selectFrom('practice').select('name').where('id', '=', made.right.practiceId).executeTakeFirstOrThrow()).name }])
    expect((await viewIncident(room.admin, made.incidentId)).sentInstead.map(one => one.recipient)).toContain('Dr Ann Twin')
  })
  it('is refused when they have it already, left, or are nobody', async () => {
    const made = await withdrawn()
    const send = (physicianId: string) => sendToRecipient(room.admin, { reportId: made.reportId, physicianId, reason: 'another' })
    await t.db.updateTable('physician').set({ leftOn: '2026-12-01' }).where('id', '=', made.right.id).execute()
    for (const id of [made.copy.id, made.right.id, 'nobody']) await expect(send(id)).rejects.toMatchObject({ code: 'not-valid' })
  })
  it('may be the same one, when it was taken back by mistake', async () => {
    const { wrong } = await namesakes()
    const { reportId } = await room.signed({}, { physicianId: wrong.id, copyPhysicianIds: [] })
    await withdrawDelivery(room.admin, { id: (await deliveriesOf(reportId))[0]!.id, reason: 'Taken back' })
    await sendToRecipient(room.admin, { reportId, physicianId: wrong.id, reason: 'It was right after all' })
    await round()
    expect((await deliveriesOf(reportId)).map(row => row.state).toSorted()).toEqual(['sent', 'withdrawn'])
  })
  it('who is not complete in the directory becomes a task', async () => {
    const made = await withdrawn()
    await t.db.updateTable('physician').set({ emailVerifiedAt: null }).where('id', '=', made.right.id).execute()
    await sendToRecipient(room.admin, { reportId: made.reportId, physicianId: made.right.id, reason: 'The right Dr Twin' })
    const delivery = (await deliveriesOf(made.reportId)).find(row => row.physicianId === made.right.id)!
    expect(delivery.state).toBe('given-up')
    expect(await t.db.selectFrom('task').select('kind').where('subjectId', '=', delivery.id).execute()).toEqual([{ kind: 'deliver-by-hand' }])
  })
})

it('the trail of all this is intact', async () => {
  expect(await verifyAudit(t.context)).toMatchObject({ acts: { intact: true }, views: { intact: true } })
})
