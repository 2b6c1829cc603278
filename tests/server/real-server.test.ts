import { simpleParser } from 'mailparser'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { SmtpTransport } from '#server/email/transport'
import { closePdfThread } from '#server/pdf/render-pdf'
import { runOutboxOnce } from '#server/services/run-outbox'
import { takeBounce } from '#server/services/take-bounces'
import { testContext } from './helpers'
import { startPostfix, whyNoPostfix } from './postfix'
import { readingRoom } from './reading-helpers'

/** A mail server as clinics have one, with all its own ideas about mail. */
describe.skipIf(whyNoPostfix)(`against Debian's postfix${whyNoPostfix ? `, left out: ${whyNoPostfix}` : ''}`, async () => {
  const t = await testContext({ bounceAddress: 'back+*@orthodrome.example' })
  const room = await readingRoom(t)
  let server: Awaited<ReturnType<typeof startPostfix>>
  let transport: SmtpTransport
  beforeAll(async () => {
    server = await startPostfix()
    transport = new SmtpTransport(server.url)
  }, 60_000)
  afterAll(async () => {
    transport?.close()
    await server?.stop()
    await closePdfThread()
  })
  const round = async () => {
    t.clock.minutes(2)
    return await runOutboxOnce(t.context, { transport, owner: 'test' })
  }
  const deliveryTo = (physicianId: string) => t.db.selectFrom('delivery').innerJoin('outboxMail', 'outboxMail.deliveryId', 'delivery.id').select(['delivery.id', 'delivery.state', 'messageId', 'outboxMail.id as mailId']).where('physicianId', '=', physicianId).executeTakeFirstOrThrow()

  it('a report arrives whole: the same Message-ID, text, HTML and the encrypted PDF, no line too long', async () => {
    const physician = await t.makePhysician()
    await room.signed({}, { physicianId: physician.id, copyPhysicianIds: [] })
    expect(await round()).toEqual({ accepted: 1, temporary: 0, permanent: 0, uncertain: 0 })
    const [raw] = await server.mails('practice', 1)
    const mail = await simpleParser(raw!)
    const delivery = await deliveryTo(physician.id)
    expect([delivery.state, mail.messageId]).toEqual(['sent', delivery.messageId])
    expect(mail.headers.get('return-path')).toMatchObject({ value: [{ address: `back+${delivery.mailId}@orthodrome.example` }] })
    expect([mail.text, mail.html]).toEqual([expect.stringContaining('/acknowledge/'), expect.stringContaining('/acknowledge/')])
    expect(mail.attachments.map(file => [file.contentType, file.content.subarray(0, 5).toString()])).toEqual([['application/pdf', '%PDF-']])
    expect(mail.attachments[0]!.content.includes('/Encrypt')).toBe(true)
  })
  it('twenty over kept connections arrive once each', async () => {
    const physicians = await Promise.all(Array.from({ length: 20 }, () => t.makePhysician()))
    for (let index = 0; index < 20; index += 5) await room.signed({}, { physicianId: physicians[index]!.id, copyPhysicianIds: physicians.slice(index + 1, index + 5).map(one => one.id) })
    expect((await round()).accepted).toBe(20)
    const got = await Promise.all((await server.mails('practice', 21)).map(async raw => (await simpleParser(raw)).messageId))
    expect(new Set(got).size).toBe(21)
    expect((await round()).accepted).toBe(0)
  })
  it('a recipient that it does not serve is refused for good, with a task', async () => {
    const physician = await t.makePhysician({ email: 'someone@elsewhere.example' })
    await room.signed({}, { physicianId: physician.id, copyPhysicianIds: [] })
    await round()
    const delivery = await deliveryTo(physician.id)
    expect(delivery.state).toBe('given-up')
    expect(await t.db.selectFrom('task').select('kind').where('subjectId', '=', delivery.id).execute()).toEqual([{ kind: 'delivery-given-up' }])
  })
  it('what it takes and cannot deliver comes back as its own report, and the delivery is bounced', async () => {
    const physician = await t.makePhysician({ email: 'away@practice.example' })
    await room.signed({}, { physicianId: physician.id, copyPhysicianIds: [] })
    expect((await round()).accepted).toBe(1)
    const [report] = await server.mails('bounces', 1)
    expect(report!.includes('%PDF')).toBe(false)
    expect(await takeBounce(t.context, report!)).toBe('done')
    expect((await deliveryTo(physician.id)).state).toBe('bounced')
    expect(await takeBounce(t.context, report!)).toBe('done')
  })
})
