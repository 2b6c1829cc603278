import { execFileSync } from 'node:child_process'
import { mkdtempSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { simpleParser } from 'mailparser'
import { afterAll, beforeEach, describe, expect, it } from 'vitest'
import { SmtpTransport, type MailTransport } from '#server/email/transport'
import { closePdfThread } from '#server/pdf/render-pdf'
import { acknowledgeDelivery, viewAcknowledge } from '#server/services/acknowledge-delivery'
import { resolveDelivery, sendDeliveryNow, withdrawDelivery } from '#server/services/change-delivery'
import { finishTask } from '#server/services/finish-task'
import { openTasks } from '#server/database/queries/tasks'
import { queueMail } from '#server/services/queue-mail'
import { reportPdf } from '#server/services/make-report-pdf'
import { runOutboxOnce } from '#server/services/run-outbox'
import { claimDue, releaseHeld } from '#server/services/outbox-claims'
import { verifyAudit } from '#server/services/verify-audit'
import { TEST_NOW, testContext } from './helpers'
import { readingRoom } from './reading-helpers'
import { smtpSink, type Behaviour } from './smtp-sink'

const t = await testContext()
const room = await readingRoom(t)
const sink = await smtpSink()
const transport = new SmtpTransport(sink.url)
afterAll(async () => {
  transport.close()
  await sink.close()
  await closePdfThread()
})

const folder = mkdtempSync(join(tmpdir(), 'orthodrome-mail-'))
const round = (owner = 'this-process', over: MailTransport = transport) => runOutboxOnce(t.context, { transport: over, owner })
async function signed() {
  const { reportId, studyId } = await room.signed()
  const delivery = await t.db.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').select('delivery.id').where('reportId', '=', reportId).executeTakeFirstOrThrow()
  return { reportId, studyId, deliveryId: delivery.id }
}
const delivery = (id: string) => t.db.selectFrom('delivery').selectAll().where('id', '=', id).executeTakeFirstOrThrow()
const mail = (id: string) => t.db.selectFrom('outboxMail').selectAll().where('deliveryId', '=', id).executeTakeFirstOrThrow()
const tasks = (id: string) => t.db.selectFrom('task').selectAll().where('subjectId', '=', id).where('doneAt', 'is', null).execute()
const behave = (behaviour: Behaviour) => sink.state.behaviour = behaviour
async function sentOnce() {
  const made = await signed()
  t.clock.minutes(2)
  await round()
  return made
}

beforeEach(async () => {
  // What earlier tests left waiting must not leave during this one.
  await t.db.updateTable('outboxMail').set({ state: 'withdrawn' }).where('state', 'in', ['held', 'queued', 'failed', 'sending']).execute()
  behave('ok')
  t.clock.set(TEST_NOW)
  sink.state.taken.length = 0
  sink.state.swallowed.length = 0
})

describe('what arrives', () => {
  it('after the hold of a minute, once, with text and HTML, and nothing about the patient', async () => {
    const { deliveryId, studyId } = await signed()
    await round()
    expect(sink.state.taken).toHaveLength(0)
    expect((await delivery(deliveryId)).state).toBe('held')
    t.clock.advance(61_000)
    expect(await round()).toEqual({ accepted: 1, temporary: 0, permanent: 0, uncertain: 0 })
    expect(await round()).toEqual({ accepted: 0, temporary: 0, permanent: 0, uncertain: 0 })
    expect(await delivery(deliveryId)).toMatchObject({ state: 'sent', attempts: 1 })

    const raw = sink.state.taken[0]!
    const parsed = await simpleParser(raw)
    const stored = await mail(deliveryId)
    expect(parsed.messageId).toBe(stored.messageId)
    expect(parsed.subject).toMatch(/^A nerve conduction report is ready \(REP-2026-\d{6}\)$/)
    expect(parsed.headers.get('auto-submitted')).toBe('auto-generated')
    expect(parsed.text).toContain('passphrase')
    expect(parsed.html).toContain('/acknowledge/')
    expect(parsed.attachments.map(file => file.filename)).toEqual([expect.stringMatching(/^REP-2026-\d{6}\.pdf$/)])
    const study = await t.db.selectFrom('study').innerJoin('patient', 'patient.id', 'study.patientId').selectAll('patient').select('study.number').where('study.id', '=', studyId).executeTakeFirstOrThrow()
    const words = [parsed.subject, parsed.text, parsed.html, [...parsed.headers.keys()].map(key => String(parsed.headers.get(key))).join(' ')].join(' ')
    for (const secret of [study.familyName, study.givenName, study.birthDate, study.recordNumber, '1974', 'median', 'neuropathy', 'seven invented words']) expect(words).not.toContain(secret)
    expect(raw.toString('latin1').split('\r\n').every(line => line.length <= 998)).toBe(true)
    expect(raw.toString('latin1').replaceAll('\r\n', '')).not.toMatch(/[\r\n]/)
  })
  it('the attachment opens with the practice\'s passphrase alone, and is the stored PDF', async () => {
    const { reportId } = await sentOnce()
    const parsed = await simpleParser(sink.state.taken[0]!)
    const file = join(folder, 'sent.pdf')
    writeFileSync(file, parsed.attachments[0]!.content)
    expect(() => execFileSync('qpdf', ['--check', file], { stdio: 'pipe' })).toThrow()
    const shown = execFileSync('qpdf', ['--password=seven invented words that nobody has used', '--show-encryption', file], { encoding: 'utf8' })
    expect(shown).toContain('R = 6')
    expect(shown).toContain('file encryption method: AESv3')
    const version = await t.db.selectFrom('reportVersion').select('id').where('reportId', '=', reportId).executeTakeFirstOrThrow()
    const stored = await reportPdf(t.context, version.id)
    writeFileSync(join(folder, 'stored.pdf'), stored.bytes)
    const plain = join(folder, 'decrypted.pdf')
    execFileSync('qpdf', ['--password=seven invented words that nobody has used', '--decrypt', file, plain])
    const textOf = (name: string) => execFileSync('pdftotext', ['-layout', name, '-'], { encoding: 'utf8' })
    expect(textOf(plain)).toBe(textOf(join(folder, 'stored.pdf')))
    expect(textOf(plain)).toContain('median')
  })
  it('two sendings of one PDF share no encrypted byte sequence', async () => {
    const { reportId } = await sentOnce()
    const { encryptPdf } = await import('#server/pdf/encrypt-pdf')
    const version = await t.db.selectFrom('reportVersion').select('id').where('reportId', '=', reportId).executeTakeFirstOrThrow()
    const { bytes } = await reportPdf(t.context, version.id)
    const [one, two] = [encryptPdf(bytes, 'word'), encryptPdf(bytes, 'word')]
    const from = Buffer.from(one).indexOf('stream') + 8
    expect(Buffer.from(two).includes(Buffer.from(one).subarray(from, from + 32))).toBe(false)
  })
  it('connections are used again', async () => {
    const before = sink.state.connections
    await signed()
    await signed()
    await signed()
    t.clock.minutes(2)
    await runOutboxOnce(t.context, { transport, owner: 'one', parallel: 1 })
    expect(sink.state.taken).toHaveLength(3)
    expect(sink.state.connections - before).toBeLessThanOrEqual(1)
  })
})

describe('what does not arrive', () => {
  it.each(['later', 'later-after-data', 'hang-up-before-data'] as const)('%s: waits 15 minutes, 2 hours, 24 hours, then gives up with a task', async (behaviour) => {
    behave(behaviour)
    const { deliveryId } = await sentOnce()
    const due = async () => (Date.parse((await mail(deliveryId)).dueAt) - t.context.clock().getTime()) / 60_000
    for (const minutes of [15, 120, 1440]) {
      expect((await delivery(deliveryId)).state).toBe('failed')
      expect(await due()).toBe(minutes)
      t.clock.minutes(minutes - 1)
      expect((await round()).temporary).toBe(0)
      t.clock.minutes(1)
      await round()
    }
    expect(await delivery(deliveryId)).toMatchObject({ state: 'given-up', attempts: 4 })
    expect((await tasks(deliveryId)).map(task => task.kind)).toEqual(['delivery-given-up'])
    expect(sink.state.taken).toHaveLength(0)
  })
  it.each(['never', 'unknown-recipient', 'never-after-data'] as const)('%s: is given up at once, with a task', async (behaviour) => {
    behave(behaviour)
    const { deliveryId } = await sentOnce()
    expect(await delivery(deliveryId)).toMatchObject({ state: 'given-up', attempts: 1 })
    expect(await tasks(deliveryId)).toHaveLength(1)
  })
  it('no server at all: is tried again', async () => {
    const { deliveryId } = await signed()
    t.clock.minutes(2)
    const nobody = new SmtpTransport('smtp://127.0.0.1:1')
    await round('this-process', nobody)
    expect((await delivery(deliveryId)).state).toBe('failed')
    t.clock.minutes(15)
    await round()
    expect((await delivery(deliveryId)).state).toBe('sent')
  })
  it('cut in the middle of a large message: certainly not accepted, so it may go again', async () => {
    behave('hang-up-in-data')
    const message = Buffer.from(`Subject: large\r\n\r\n${'0123456789abcdef\r\n'.repeat(1_000_000)}`)
    let marked = false
    const outcome = await transport.send({ from: 'a@a.example', to: 'b@b.example' }, message, async () => {
      marked = true
    })
    expect([outcome.kind, marked]).toEqual(['temporary', false])
  })
  it('nothing goes in clear where TLS is asked for: not to a server without it, not to one whose certificate nobody vouches for', async () => {
    const plain = new SmtpTransport(sink.url.replace('smtp:', 'smtp+starttls:'))
    const offering = await smtpSink(0, true)
    const doubtful = new SmtpTransport(offering.url.replace('smtp:', 'smtp+starttls:'))
    for (const one of [plain, doubtful]) {
      const outcome = await one.send({ from: 'a@a.example', to: 'b@b.example' }, Buffer.from('Subject: x\r\n\r\nsecret'), async () => undefined)
      expect(outcome.kind).toBe('temporary')
    }
    expect([sink.state.taken, offering.state.taken]).toEqual([[], []])
    await offering.close()
  })
  it('the same Message-ID at every attempt', async () => {
    behave('later-after-data')
    const { deliveryId } = await sentOnce()
    behave('ok')
    t.clock.minutes(15)
    await round()
    expect((await simpleParser(sink.state.taken[0]!)).messageId).toBe((await mail(deliveryId)).messageId)
    expect(sink.state.taken).toHaveLength(1)
  })
  it('a practice without a passphrase gets nothing in clear: the mail waits and a task says so', async () => {
    const { deliveryId } = await signed()
    const { practiceId } = await delivery(deliveryId)
    await t.db.updateTable('practice').set({ passphraseSealed: null }).where('id', '=', practiceId).execute()
    t.clock.minutes(2)
    await round()
    expect((await delivery(deliveryId)).state).toBe('failed')
    expect((await tasks(deliveryId)).map(task => task.kind)).toEqual(['pdf-failed'])
    expect(sink.state.taken).toHaveLength(0)
  })
})

describe('what nobody can know', () => {
  it('the server hung up after the last byte: uncertain, a task with the Message-ID, never sent again', async () => {
    behave('hang-up-after-data')
    const { deliveryId } = await sentOnce()
    expect(sink.state.swallowed).toHaveLength(1)
    expect((await delivery(deliveryId)).state).toBe('uncertain')
    const [task] = await tasks(deliveryId)
    expect(task?.sentence).toContain((await mail(deliveryId)).messageId)
    behave('ok')
    t.clock.minutes(60 * 24 * 3)
    await round()
    expect(sink.state.taken).toHaveLength(0)
  })
  it('the process ended before the last byte: it goes again when the lease is over', async () => {
    const { deliveryId } = await signed()
    t.clock.minutes(2)
    await releaseHeld(t.context, 10)
    await claimDue(t.context, 'a process that ended', 10)
    await round()
    expect((await delivery(deliveryId)).state).toBe('sending')
    t.clock.minutes(6)
    await round()
    expect((await delivery(deliveryId)).state).toBe('sent')
    expect(sink.state.taken).toHaveLength(1)
  })
  it('the process ended after the last byte: uncertain, never sent again', async () => {
    const { deliveryId } = await signed()
    t.clock.minutes(2)
    await releaseHeld(t.context, 10)
    await claimDue(t.context, 'a process that ended', 10)
    await t.db.updateTable('outboxMail').set({ lastByteAt: t.context.clock().toISOString() }).where('deliveryId', '=', deliveryId).execute()
    t.clock.minutes(6)
    await round()
    await round()
    expect((await delivery(deliveryId)).state).toBe('uncertain')
    expect(await tasks(deliveryId)).toHaveLength(1)
    expect(sink.state.taken).toHaveLength(0)
  })
  it('the lease is lost before the last byte: the attempt ends without an accepted mail', async () => {
    const { deliveryId } = await signed()
    t.clock.minutes(2)
    const stealing: MailTransport = {
      send: async (envelope, message, beforeLastByte) => {
        await t.db.updateTable('outboxMail').set({ leaseOwner: 'somebody else' }).where('deliveryId', '=', deliveryId).execute()
        return await transport.send(envelope, message, beforeLastByte)
      },
      close: () => undefined,
    }
    await round('this-process', stealing)
    expect(sink.state.taken).toHaveLength(0)
    expect((await mail(deliveryId)).leaseOwner).toBe('somebody else')
  })
})

describe('what people do about it', () => {
  it('send now ends the hold', async () => {
    const { deliveryId } = await signed()
    await sendDeliveryNow(room.admin, deliveryId)
    await round()
    expect((await delivery(deliveryId)).state).toBe('sent')
  })
  it('withdrawn within the hold: nothing leaves', async () => {
    const { deliveryId } = await signed()
    await withdrawDelivery(room.admin, { id: deliveryId, reason: 'Wrong practice' })
    t.clock.minutes(5)
    await round()
    expect(sink.state.taken).toHaveLength(0)
    expect(await delivery(deliveryId)).toMatchObject({ state: 'withdrawn', stateReason: 'Wrong practice' })
  })
  it('withdrawn after it left: its page says so, and the incident is a task with a clock', async () => {
    const { deliveryId } = await sentOnce()
    const { incidentId } = await withdrawDelivery(room.admin, { id: deliveryId, reason: 'Wrong practice' })
    const [task] = await tasks(incidentId!)
    expect(task).toMatchObject({ kind: 'incident', ownerRole: 'administrator' })
    expect(Date.parse(task!.dueAt!) - t.context.clock().getTime()).toBe(72 * 3_600_000)
    const token = /acknowledge\/([\w-]+)/.exec((await simpleParser(sink.state.taken[0]!)).text!)![1]!
    expect(await viewAcknowledge(t.context, { token, address: '192.0.2.2' })).toMatchObject({ withdrawn: true })
  })
  it('withdraw while it is on the wire is refused', async () => {
    const { deliveryId } = await signed()
    t.clock.minutes(2)
    await releaseHeld(t.context, 10)
    await claimDue(t.context, 'x', 10)
    await expect(withdrawDelivery(room.admin, { id: deliveryId, reason: 'Wrong practice' })).rejects.toMatchObject({ code: 'wrong-state' })
  })
  it('uncertain is settled as arrived, sent again to the present address, or delivered by hand', async () => {
    for (const [outcome, state] of [['arrived', 'acknowledged'], ['by-hand', 'by-hand'], ['send-again', 'sent']] as const) {
      behave('hang-up-after-data')
      const { deliveryId } = await sentOnce()
      behave('ok')
      const { physicianId } = await delivery(deliveryId)
      await t.db.updateTable('physician').set({ email: `new-${outcome}@practice.example` }).where('id', '=', physicianId).execute()
      await resolveDelivery(room.admin, { id: deliveryId, outcome, note: 'Telephoned the practice', hand: { means: 'telephone', told: 'The practice', at: TEST_NOW, readBack: true } })
      await round()
      expect((await delivery(deliveryId)).state).toBe(state)
      expect(await tasks(deliveryId)).toEqual([])
    }
    const parsed = await simpleParser(sink.state.taken.at(-1)!)
    expect(parsed.to).toMatchObject({ text: 'new-send-again@practice.example' })
  })
  it('opening the link acknowledges nothing; the button does, once', async () => {
    const { deliveryId } = await sentOnce()
    const token = /acknowledge\/([\w-]+)/.exec((await simpleParser(sink.state.taken[0]!)).text!)![1]!
    expect(Buffer.from(token, 'base64url').length * 8).toBeGreaterThanOrEqual(128)
    const from = { token, address: '192.0.2.3' }
    const view = await viewAcknowledge(t.context, from)
    expect(view).toMatchObject({ version: 1, superseded: false, withdrawn: false, acknowledgedAt: null })
    expect(Object.keys(view).sort()).toEqual(['acknowledgedAt', 'collect', 'expired', 'organisation', 'replies', 'reportNumber', 'superseded', 'version', 'withdrawn'])
    expect((await delivery(deliveryId)).state).toBe('sent')
    const first = await acknowledgeDelivery(t.context, from)
    t.clock.minutes(1)
    expect(await acknowledgeDelivery(t.context, from)).toEqual(first)
    expect((await delivery(deliveryId)).state).toBe('acknowledged')
  })
  it('guessing links is slowed', async () => {
    const guess = () => viewAcknowledge(t.context, { token: 'y'.repeat(43), address: '192.0.2.9' }).catch(error => error.code as string)
    const answers = await Array.from({ length: 32 }).reduce<Promise<string[]>>(async before => [...await before, await guess() as string], Promise.resolve([]))
    expect(answers.slice(0, 30)).toEqual(Array.from({ length: 30 }, () => 'not-found'))
    expect(answers[31]).toBe('too-many-requests')
  })
  it('a task is seen and closed by those who hold its role at its site, and by nobody else', async () => {
    behave('never')
    const { deliveryId } = await sentOnce()
    const [task] = await tasks(deliveryId)
    const seenBy = async (who: typeof room.admin) => (await openTasks(t.db, { userId: who.actor.userId!, holdings: who.actor.holdings })).some(row => row.id === task!.id)
    expect([await seenBy(room.admin), await seenBy(room.technologist)]).toEqual([true, false])
    await expect(finishTask(room.technologist, { id: task!.id, resolution: '' })).rejects.toMatchObject({ code: 'not-found' })
    await finishTask(room.admin, { id: task!.id, resolution: 'Telephoned' })
    expect(await tasks(deliveryId)).toEqual([])
  })
})

describe('the outbox itself', () => {
  it.each(['a@b.example\r\nBcc: x@y.example', 'a@b.example, c@d.example', '<a@b.example>', 'a b@c.example', 'a'])('refuses the address %j', async (toAddress) => {
    await expect(t.db.transaction().execute(trx => queueMail(t.context, trx, { template: 'report-ready', toAddress, data: { reportNumber: 'REP-1', version: 1, status: 'final', organisation: '', siteName: '', sitePhone: '', acknowledgeToken: 'x' } }))).rejects.toThrow('mailbox')
  })
  it('the trail of all this is intact', async () => {
    expect(await verifyAudit(t.context)).toMatchObject({ acts: { intact: true }, views: { intact: true } })
  })
})
