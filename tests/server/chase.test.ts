import { afterAll, beforeEach, describe, expect, it } from 'vitest'
import { dispatchPage } from '#server/database/queries/deliveries'
import { openTasks } from '#server/database/queries/tasks'
import type { MailTransport, SendOutcome } from '#server/email/transport'
import { closePdfThread } from '#server/pdf/render-pdf'
import { acknowledgeDelivery } from '#server/services/acknowledge-delivery'
import { chaseList, chaseUnacknowledged } from '#server/services/chase'
import { resolveDelivery, withdrawDelivery } from '#server/services/change-delivery'
import { finishTask } from '#server/services/finish-task'
import { makeNewVersion } from '#server/services/make-new-version'
import { runOutboxOnce } from '#server/services/run-outbox'
import { takeTask } from '#server/services/take-task'
import { resolveDeliverySchema } from '#shared/schemas/delivery'
import { approvePolicy, proposePolicy } from '#server/services/policies'
import { clocks } from '#shared/policies/clocks'
import { TEST_NOW, testContext } from './helpers'
import { finishedDraft, meaning, PASSWORD, readingRoom } from './reading-helpers'

/** Who has to be gone after, since when, and who does it. */
const t = await testContext()
const room = await readingRoom(t)
const colleague = t.as(await t.makeUser({ roles: [{ siteId: room.site.id, role: 'administrator' }] }))
afterAll(closePdfThread)
beforeEach(() => t.clock.set(TEST_NOW))

let outcome: SendOutcome = { kind: 'accepted' }
let sends = 0
const transport: MailTransport = { send: async (_envelope, _message, beforeLastByte) => {
  await beforeLastByte()
  sends++
  return outcome
}, close: () => undefined }
const round = async () => {
  t.clock.minutes(2)
  await runOutboxOnce(t.context, { transport, owner: 'test' })
}
async function sent(urgency: 'routine' | 'urgent' | 'same-week' = 'urgent', how: SendOutcome = { kind: 'accepted' }) {
  outcome = how
  const { reportId } = await room.signed({}, { urgency, urgencyReason: 'asked for' })
  await round()
  outcome = { kind: 'accepted' }
  const { id } = await t.db.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').select('delivery.id').where('reportId', '=', reportId).executeTakeFirstOrThrow()
  return { id, reportId }
}
const row = async (id: string) => t.db.selectFrom('delivery').selectAll().where('id', '=', id).executeTakeFirstOrThrow()
const listed = async (id: string) => (await chaseList(t.context, [room.site.id])).find(one => one.id === id)
const tasks = (id: string) => t.db.selectFrom('task').selectAll().where('subjectId', '=', id).where('doneAt', 'is', null).execute()
const DAY = 1440

describe('a report that nobody acknowledged', () => {
  it.each([['same-week', 1], ['urgent', 2], ['routine', 5]] as const)('%s: is on the list and a task after %i days, not a minute before', async (urgency, days) => {
    const { id } = await sent(urgency)
    t.clock.minutes(days * DAY - 1)
    await chaseUnacknowledged(t.context)
    expect([await listed(id), await tasks(id)]).toEqual([undefined, []])
    t.clock.minutes(2)
    await chaseUnacknowledged(t.context)
    await chaseUnacknowledged(t.context)
    expect((await tasks(id)).map(task => task.kind)).toEqual(['delivery-unacknowledged'])
    expect(await listed(id)).toMatchObject({ urgency, state: 'sent', dueAt: new Date(Date.parse((await row(id)).sentAt!) + days * DAY * 60_000).toISOString() })
  })
  it('is gone from both once it is acknowledged', async () => {
    const { id } = await sent()
    t.clock.minutes(3 * DAY)
    await chaseUnacknowledged(t.context)
    const { dataSealed } = await t.db.selectFrom('outboxMail').select('dataSealed').where('deliveryId', '=', id).executeTakeFirstOrThrow()
    await acknowledgeDelivery(t.context, { token: (JSON.parse(t.keys.unseal(dataSealed)) as { acknowledgeToken: string }).acknowledgeToken, address: '192.0.2.1' })
    expect([await listed(id), await tasks(id)]).toEqual([undefined, []])
  })
  it('whose task was done comes back after the same time', async () => {
    const { id } = await sent()
    t.clock.minutes(3 * DAY)
    await chaseUnacknowledged(t.context)
    await finishTask(room.admin, { id: (await tasks(id))[0]!.id, resolution: 'They look for it' })
    await chaseUnacknowledged(t.context)
    expect(await tasks(id)).toEqual([])
    t.clock.minutes(2 * DAY + 1)
    await chaseUnacknowledged(t.context)
    expect(await tasks(id)).toHaveLength(1)
  })
  it('needs no receipt any more when a later version stands', async () => {
    const { id, reportId } = await sent()
    await makeNewVersion(room.reader, { reportId, kind: 'corrected', reason: 'The side was wrong', password: PASSWORD, meaning, draft: finishedDraft({ recommendation: 'Splint at night.' }) })
    t.clock.minutes(3 * DAY)
    await chaseUnacknowledged(t.context)
    expect([await listed(id), await tasks(id)]).toEqual([undefined, []])
  })
})

describe('the list', () => {
  it('holds what failed, was given up and is uncertain, the longest overdue first', async () => {
    const failed = await sent('routine', { kind: 'temporary', because: '451 later' })
    const givenUp = await sent('routine', { kind: 'permanent', because: '550 no' })
    const uncertain = await sent('routine', { kind: 'uncertain', because: 'no answer' })
    const mine = (await chaseList(t.context, [room.site.id])).filter(one => [failed.id, givenUp.id, uncertain.id].includes(one.id))
    expect(mine.map(one => one.state).toSorted()).toEqual(['failed', 'given-up', 'uncertain'])
    expect(mine.map(one => one.dueAt)).toEqual(mine.map(one => one.dueAt).toSorted())
    expect(mine.find(one => one.id === givenUp.id)).toMatchObject({ taskId: expect.any(String), ownerName: null })
    expect(await chaseList(t.context, [])).toEqual([])
  })
  it('names the owner: whoever takes it, until a colleague of the same role takes it over', async () => {
    const { id } = await sent('routine', { kind: 'permanent', because: '550 no' })
    const [task] = await tasks(id)
    await takeTask(room.admin, task!.id)
    expect(await listed(id)).toMatchObject({ ownerName: room.admin.actor.label })
    await takeTask(colleague, task!.id)
    expect(await listed(id)).toMatchObject({ ownerName: colleague.actor.label })
    expect((await openTasks(t.db, { userId: room.admin.actor.userId!, holdings: room.admin.actor.holdings })).map(one => one.id)).not.toContain(task!.id)
    await expect(takeTask(room.technologist, task!.id)).rejects.toMatchObject({ code: 'not-found' })
    const taken = await t.db.selectFrom('auditEvent').select('dataJson').where('name', '=', 'task.taken').where('subjectId', '=', task!.id).orderBy('seq').execute()
    expect(taken.map(event => JSON.parse(event.dataJson).from)).toEqual([null, room.admin.actor.userId])
  })
})

describe('what somebody records', () => {
  const hand = { means: 'telephone' as const, told: 'Sister Agnes', at: '2026-12-02T09:01:00.000Z', readBack: true }
  it('by hand: how, to whom, when and whether it was read back, from every state that needs it', async () => {
    for (const how of [{ kind: 'accepted' }, { kind: 'permanent', because: 'no' }, { kind: 'uncertain', because: 'no answer' }] as SendOutcome[]) {
      const { id } = await sent('routine', how)
      await resolveDelivery(room.admin, { id, outcome: 'by-hand', note: 'Read out in full', hand })
      expect((await row(id)).state).toBe('by-hand')
      expect(await t.db.selectFrom('deliveryByHand').selectAll().where('deliveryId', '=', id).execute()).toMatchObject([{ ...hand, readBack: 1, note: 'Read out in full', recordedBy: room.admin.actor.userId }])
      const shown = (await dispatchPage(t.db, { siteIds: [room.site.id], state: 'by-hand' }, { page: 1, pageSize: 50 })).rows.find(one => one.id === id)
      expect(shown!.byHand).toEqual(hand)
    }
  })
  it('not without saying how, and not in the future', async () => {
    expect(resolveDeliverySchema.safeParse({ outcome: 'by-hand', note: 'some words' }).error?.issues[0]?.path).toEqual(['hand.told'])
    const { id } = await sent()
    await expect(resolveDelivery(room.admin, { id, outcome: 'by-hand', note: 'some words' })).rejects.toMatchObject({ code: 'not-valid' })
    await expect(resolveDelivery(room.admin, { id, outcome: 'by-hand', note: 'some words', hand: { ...hand, at: '2027-01-01T00:00:00.000Z' } })).rejects.toMatchObject({ options: { fields: [{ path: 'hand.at' }] } })
    expect((await row(id)).state).toBe('sent')
  })
  it('sent again at somebody\'s wish: one mail more, with the same Message-ID', async () => {
    const { id } = await sent()
    const before = sends
    await resolveDelivery(room.admin, { id, outcome: 'send-again', note: 'They deleted it' })
    await round()
    await round()
    expect([sends - before, (await row(id)).state]).toEqual([1, 'sent'])
  })
  it('a letter that went to the wrong practice is an incident, too', async () => {
    const { id } = await sent()
    await resolveDelivery(room.admin, { id, outcome: 'by-hand', note: 'By post', hand: { ...hand, means: 'letter' } })
    expect((await withdrawDelivery(room.admin, { id, reason: 'Wrong practice' })).incidentId).not.toBeNull()
  })
})

it('the hours that two people approved are those that count', async () => {
  const body = { ...clocks.initial, acknowledge: { ...clocks.initial.acknowledge, urgent: 3 } }
  const { id: policyId } = await proposePolicy(room.director, { name: 'clocks', siteId: null, body, note: 'Telephone sooner', effectiveOn: TEST_NOW.slice(0, 10) })
  await approvePolicy(t.as(await t.makeUser({ roles: ['medical-director'] })), { id: policyId })
  const { id } = await sent('urgent')
  t.clock.minutes(179)
  await chaseUnacknowledged(t.context)
  expect([await listed(id), await tasks(id)]).toEqual([undefined, []])
  t.clock.minutes(2)
  await chaseUnacknowledged(t.context)
  expect([(await listed(id))?.urgency, (await tasks(id)).length]).toEqual(['urgent', 1])
})
