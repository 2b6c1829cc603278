import { afterAll, beforeEach, describe, expect, it } from 'vitest'
import type { MailTransport } from '#server/email/transport'
import { closePdfThread } from '#server/pdf/render-pdf'
import { acknowledgeDelivery } from '#server/services/acknowledge-delivery'
import { resolveDelivery, sendDeliveryNow, withdrawDelivery } from '#server/services/change-delivery'
import { makeNewVersion } from '#server/services/make-new-version'
import { runOutboxOnce } from '#server/services/run-outbox'
import { sendToRecipient } from '#server/services/send-to-recipient'
import { takeBounce } from '#server/services/take-bounces'
import { verifyAudit } from '#server/services/verify-audit'
import { statusReport } from '../../scripts/status-report.mjs'
import { TEST_NOW, testContext } from './helpers'
import { finishedDraft, meaning, PASSWORD, readingRoom } from './reading-helpers'

/** Two things happen to one delivery at once: one wins, the other is told, and nothing arrives that should not. */
const t = await testContext()
const room = await readingRoom(t)
const colleague = t.as(await t.makeUser({ roles: [{ siteId: room.site.id, role: 'administrator' }] }))
afterAll(closePdfThread)
beforeEach(() => t.clock.set(TEST_NOW))

let taken: string[] = []
/** Lets something happen at the last moment before the last byte, or right after it. */
let between: { before?: () => Promise<unknown>, after?: () => Promise<unknown> } = {}
const transport: MailTransport = { send: async (envelope, _message, beforeLastByte) => {
  await between.before?.()
  await beforeLastByte()
  taken.push(envelope.to)
  await between.after?.()
  return { kind: 'accepted' }
}, close: () => undefined }
const round = (owner = 'one') => runOutboxOnce(t.context, { transport, owner })
async function held() {
  const { reportId } = await room.signed()
  const { id, acknowledgeTokenHash: _hash } = await t.db.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').select(['delivery.id', 'acknowledgeTokenHash']).where('reportId', '=', reportId).executeTakeFirstOrThrow()
  const { dataSealed, messageId } = await t.db.selectFrom('outboxMail').select(['dataSealed', 'messageId']).where('deliveryId', '=', id).executeTakeFirstOrThrow()
  taken = []
  between = {}
  return { id, reportId, messageId, token: (JSON.parse(t.keys.unseal(dataSealed)) as { acknowledgeToken: string }).acknowledgeToken }
}
const stateOf = async (id: string) => (await t.db.selectFrom('delivery').select('state').where('id', '=', id).executeTakeFirstOrThrow()).state
const settle = async (...acts: Promise<unknown>[]) => (await Promise.allSettled(acts)).map(result => result.status === 'fulfilled' ? 'won' : (result.reason as { code?: string }).code)
const incidents = (id: string) => t.db.selectFrom('incident').select('id').where('deliveryId', '=', id).execute()
const correction = (reportId: string) => makeNewVersion(room.reader, { reportId, kind: 'corrected', reason: 'The side was wrong', password: PASSWORD, meaning, draft: finishedDraft({ recommendation: 'Splint at night.' }) })

describe('send while withdrawing', () => {
  it('whoever is first: withdrawn and nothing left, or refused and sent', async () => {
    for (let turn = 0; turn < 6; turn++) {
      const { id } = await held()
      t.clock.minutes(2)
      const withdraw = () => withdrawDelivery(room.admin, { id, reason: 'Wrong practice' })
      const [first, second] = turn % 2 === 0 ? await settle(withdraw(), round()) : (await settle(round(), withdraw())).toReversed()
      const state = await stateOf(id)
      expect([['won', 'won', 'withdrawn', 0], ['wrong-state', 'won', 'sent', 1]]).toContainEqual([first, second, state, taken.length])
    }
  })
  it('withdrawing while the last byte is on its way is refused, and afterwards it is an incident', async () => {
    const { id } = await held()
    t.clock.minutes(2)
    const answers: (string | undefined)[] = []
    between = { before: async () => answers.push(...await settle(withdrawDelivery(room.admin, { id, reason: 'Wrong practice' }))), after: async () => answers.push(...await settle(withdrawDelivery(room.admin, { id, reason: 'Wrong practice' }))) }
    await round()
    expect([answers, await stateOf(id), taken.length]).toEqual([['wrong-state', 'wrong-state'], 'sent', 1])
    await withdrawDelivery(room.admin, { id, reason: 'Wrong practice' })
    expect(await incidents(id)).toHaveLength(1)
  })
  it('send now and withdraw: one of them, and one mail at most', async () => {
    const { id } = await held()
    await settle(sendDeliveryNow(room.admin, id), withdrawDelivery(colleague, { id, reason: 'Wrong practice' }))
    await round()
    expect([await stateOf(id), taken.length]).toEqual(['withdrawn', 0])
  })
})

it('two who withdraw: one wins, the other is told, one incident', async () => {
  const { id } = await held()
  t.clock.minutes(2)
  await round()
  const codes = await settle(withdrawDelivery(room.admin, { id, reason: 'Wrong practice' }), withdrawDelivery(colleague, { id, reason: 'Wrong practice' }))
  expect([codes.toSorted(), (await incidents(id)).length]).toEqual([['won', 'wrong-state'], 1])
})

it('acknowledging while it is superseded: both stand, and the correction goes out', async () => {
  for (const first of ['acknowledge', 'supersede'] as const) {
    const { id, reportId, token } = await held()
    t.clock.minutes(2)
    await round()
    const acknowledge = () => acknowledgeDelivery(t.context, { token, address: '192.0.2.5' })
    const codes = first === 'acknowledge' ? await settle(acknowledge(), correction(reportId)) : await settle(correction(reportId), acknowledge())
    expect([codes, await stateOf(id)]).toEqual([['won', 'won'], 'acknowledged'])
    t.clock.minutes(2)
    await round()
    expect(taken).toHaveLength(2)
  }
})

it('acknowledging while it is withdrawn: withdrawn it stays', async () => {
  const { id, token } = await held()
  t.clock.minutes(2)
  await round()
  await settle(withdrawDelivery(room.admin, { id, reason: 'Wrong practice' }), acknowledgeDelivery(t.context, { token, address: '192.0.2.5' }))
  expect(await stateOf(id)).toBe('withdrawn')
})

it('two processes that send at once send each mail once', async () => {
  const made = [await held(), await held(), await held()]
  taken = []
  t.clock.minutes(2)
  await Promise.all([round('one'), round('two')])
  expect(taken).toHaveLength(made.length)
})

it('two who send it to the same recipient: one delivery', async () => {
  const { reportId } = await held()
  const physician = await t.makePhysician()
  const send = (by: typeof room.admin) => sendToRecipient(by, { reportId, physicianId: physician.id, reason: 'A copy' })
  expect((await settle(send(room.admin), send(colleague))).toSorted()).toEqual(['not-valid', 'won'])
  expect(await t.db.selectFrom('delivery').select('id').where('physicianId', '=', physician.id).execute()).toHaveLength(1)
})

it('two who settle one that is uncertain: it is sent again once', async () => {
  const { id } = await held()
  t.clock.minutes(2)
  await runOutboxOnce(t.context, { transport: { ...transport, send: async (_envelope, _message, beforeLastByte) => {
    await beforeLastByte()
    return { kind: 'uncertain', because: 'no answer' }
  } }, owner: 'one' })
  const again = (by: typeof room.admin) => resolveDelivery(by, { id, outcome: 'send-again', note: 'They have nothing' })
  expect((await settle(again(room.admin), again(colleague))).toSorted()).toEqual(['won', 'wrong-state'])
  await round()
  expect(taken).toHaveLength(1)
})

it('a bounce while it is withdrawn: withdrawn it stays, and the bounce is in the trail', async () => {
  const { id, messageId } = await held()
  t.clock.minutes(2)
  await round()
  const report = Buffer.from(statusReport({ raw: Buffer.from(`Message-ID: ${messageId}\r\n\r\n`), to: 'a@b.example' }))
  await settle(withdrawDelivery(room.admin, { id, reason: 'Wrong practice' }), takeBounce(t.context, report))
  expect(await stateOf(id)).toBe('withdrawn')
  expect(await t.db.selectFrom('task').select('kind').where('subjectId', '=', id).where('doneAt', 'is', null).execute()).toEqual([])
  expect(await t.db.selectFrom('auditEvent').select('name').where('subjectId', '=', id).where('name', '=', 'delivery.bounced').execute()).toHaveLength(1)
})

it('the trail of all this is intact', async () => {
  expect(await verifyAudit(t.context)).toMatchObject({ acts: { intact: true } })
})
