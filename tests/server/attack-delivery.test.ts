import { afterAll, beforeEach, describe, expect, it } from 'vitest'
import type { MailTransport, SendOutcome } from '#server/email/transport'
import { closePdfThread } from '#server/pdf/render-pdf'
import { resolveDelivery } from '#server/services/change-delivery'
import { makeNewVersion } from '#server/services/make-new-version'
import { claimDue, recoverInterrupted, releaseHeld } from '#server/services/outbox-claims'
import { settleAttempt } from '#server/services/outbox-outcomes'
import { runOutboxOnce } from '#server/services/run-outbox'
import { renderMail } from '#server/email/templates'
import { TEST_NOW, testContext } from './helpers'
import { finishedDraft, meaning, PASSWORD, readingRoom } from './reading-helpers'

/** A superseded report must not reach anybody after the one that replaces it, whatever happened on the wire. */
const t = await testContext()
const room = await readingRoom(t)
afterAll(closePdfThread)
beforeEach(async () => {
  await t.db.updateTable('outboxMail').set({ state: 'withdrawn' }).where('state', 'in', ['held', 'queued', 'failed', 'sending']).execute()
  t.clock.set(TEST_NOW)
})

const taken: string[] = []
const server: MailTransport = {
  async send(_envelope, message, beforeLastByte): Promise<SendOutcome> {
    await beforeLastByte()
    taken.push(/^Subject: (.*(?:\r\n[ \t].*)*)/m.exec(message.toString('latin1'))![1]!.replace(/\r\n[ \t]/g, ' '))
    return { kind: 'accepted' }
  },
  close: () => undefined,
}
const round = () => runOutboxOnce(t.context, { transport: server, owner: 'this-process' })
const firstDelivery = async (reportId: string) => await t.db.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').selectAll('delivery').where('reportId', '=', reportId).where('version', '=', 1).executeTakeFirstOrThrow()
const mailOf = (id: string) => t.db.selectFrom('outboxMail').selectAll().where('deliveryId', '=', id).executeTakeFirstOrThrow()
const corrected = (reportId: string) => makeNewVersion(room.reader, { reportId, kind: 'corrected', reason: 'The side was wrong', password: PASSWORD, meaning, draft: finishedDraft({ recommendation: 'Splint at night.' }) })

/** Signed, out of the hold and on the wire; then the correction is signed. */
async function correctedOnTheWire() {
  const { reportId } = await room.signed()
  t.clock.minutes(2)
  await releaseHeld(t.context, 50)
  const [mail] = await claimDue(t.context, 'this-process', 50)
  await corrected(reportId)
  taken.length = 0
  return { reportId, mail: mail! }
}

describe('a correction signed while the earlier version is on the wire', () => {
  it('the attempt fails: it is not tried again, and only the correction arrives', async () => {
    const { reportId, mail } = await correctedOnTheWire()
    await settleAttempt(t.context, mail, { kind: 'temporary', because: '451 try later' })
    t.clock.minutes(20)
    await round()
    t.clock.minutes(3 * 24 * 60)
    await round()
    expect(taken).toEqual([expect.stringContaining('was corrected')])
    const earlier = await firstDelivery(reportId)
    expect(earlier).toMatchObject({ state: 'withdrawn', stateReason: 'superseded by version 2' })
    expect((await mailOf(earlier.id)).state).toBe('withdrawn')
    expect(await t.db.selectFrom('task').selectAll().where('subjectId', '=', earlier.id).where('doneAt', 'is', null).execute()).toEqual([])
    expect(await t.db.selectFrom('auditEvent').select('name').where('subjectId', '=', earlier.id).where('name', '=', 'delivery.withdrawn').execute()).toHaveLength(1)
  })
  it('the program ends before the last byte: the same', async () => {
    const { reportId } = await correctedOnTheWire()
    t.clock.minutes(10)
    await recoverInterrupted(t.context)
    await round()
    expect(taken).toEqual([expect.stringContaining('was corrected')])
    expect((await firstDelivery(reportId)).state).toBe('withdrawn')
  })
  it('the program ends after the last byte: it stays uncertain, and nobody can send it again', async () => {
    const { reportId, mail } = await correctedOnTheWire()
    await t.db.updateTable('outboxMail').set({ lastByteAt: TEST_NOW }).where('id', '=', mail.id).execute()
    t.clock.minutes(10)
    await recoverInterrupted(t.context)
    const { id } = await firstDelivery(reportId)
    await expect(resolveDelivery(room.admin, { id, outcome: 'send-again', note: 'they did not get it' })).rejects.toMatchObject({ code: 'not-valid' })
    expect((await firstDelivery(reportId)).state).toBe('uncertain')
    await resolveDelivery(room.admin, { id, outcome: 'arrived', note: 'they telephoned' })
    expect((await firstDelivery(reportId)).state).toBe('acknowledged')
  })
  it('it was accepted after all: it stays as sent', async () => {
    const { reportId, mail } = await correctedOnTheWire()
    await settleAttempt(t.context, mail, { kind: 'accepted' })
    t.clock.minutes(5)
    await round()
    expect((await firstDelivery(reportId)).state).toBe('sent')
  })
})

it('the link of a mail is right whether or not the configured address ends with a slash', () => {
  const data = { reportNumber: 'REP-2026-000001', version: 1, status: 'final', organisation: 'Invented', siteName: 'Site', sitePhone: '', acknowledgeToken: 'a-token' }
  for (const origin of ['https://clinic.example', 'https://clinic.example/']) expect(renderMail('report-ready', data, origin).text).toContain('https://clinic.example/acknowledge/a-token')
})
