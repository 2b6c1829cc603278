import type { EventHandler } from 'h3'
import { sql } from 'kysely'
import { simpleParser } from 'mailparser'
import { beforeAll, describe, expect, it } from 'vitest'
import { withdrawDelivery } from '#server/services/change-delivery'
import { dispatchPage } from '#server/database/queries/deliveries'
import { changePractice } from '#server/services/change-practice'
import { addDelegate, endDelegate } from '#server/services/practice-delegates'
import { runOutboxOnce } from '#server/services/run-outbox'
import { TEST_NOW, testContext } from './helpers'
import { routeFiles, serve } from './http'
import { readingRoom } from './reading-helpers'

/** A practice that collects its reports: the mail holds a link, the passphrase came another way. */
const PASSPHRASE = 'seven invented words that nobody has used'
const t = await testContext()
const room = await readingRoom(t)
const admin = t.as(await t.makeUser({ roles: [{ siteId: room.site.id, role: 'administrator' }] }))
const routes = await Promise.all(routeFiles().filter(route => route.path.startsWith('/api/acknowledge/')).map(async route => ({ ...route, handler: (await import(/* @vite-ignore */ route.file) as { default: EventHandler }).default })))
const { call } = serve(t, routes)
const received: Buffer[] = []
const transport = { send: async (_envelope: unknown, message: Buffer, beforeLastByte: () => Promise<void>) => {
  await beforeLastByte()
  received.push(message)
  return { kind: 'accepted' as const }
}, close: () => undefined }

/** A report for a practice that collects, its mail and the token of its link. */
async function mailed() {
  const practice = await t.makePractice()
  await changePractice(admin, practice.id, { deliveryMethod: 'collection-link' })
  const physician = await t.makePhysician({ practiceId: practice.id })
  const { reportId } = await room.signed({}, { physicianId: physician.id, copyPhysicianIds: [] })
  const delivery = await t.db.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').selectAll('delivery').where('reportId', '=', reportId).executeTakeFirstOrThrow()
  t.clock.minutes(2)
  await runOutboxOnce(t.context, { transport, owner: 'test' })
  const mail = await simpleParser(received.at(-1)!)
  return { mail, delivery, practice, physician, token: /acknowledge\/(\S+)/.exec(mail.text ?? '')![1]! }
}
const askWho = async (token: string, passphrase: unknown) => await call('POST', `/api/acknowledge/${token}/collectors`, { body: { passphrase } })
const collectAs = async (token: string, passphrase: unknown, collectorId: unknown) => await call('POST', `/api/acknowledge/${token}/collect`, { body: { passphrase, collectorId } })
/** As the page does it: first who may, then the first of them. */
async function collect(token: string, passphrase: unknown) {
  const who = await askWho(token, passphrase)
  return who.status === 200 ? await collectAs(token, passphrase, (who.body as unknown as { id: string }[])[0]?.id) : who
}
const lastData = async (id: string) => JSON.parse((await t.db.selectFrom('auditEvent').select('dataJson').where('subjectId', '=', id).where('name', 'like', 'delivery.collect%').orderBy('seq', 'desc').executeTakeFirstOrThrow()).dataJson) as unknown
const trail = async (id: string) => (await t.db.selectFrom('auditEvent').select('name').where('subjectId', '=', id).where('name', 'like', 'delivery.collect%').orderBy('seq').execute()).map(event => event.name)

describe('a report that is collected', () => {
  let made: Awaited<ReturnType<typeof mailed>>
  beforeAll(async () => {
    made = await mailed()
  })

  it('the mail holds the link, no attachment and no word of the passphrase', () => {
    expect([made.delivery.method, made.mail.attachments]).toEqual(['collection-link', []])
    expect(made.mail.text).toContain('nothing is attached')
    expect(made.mail.text).not.toContain(PASSPHRASE)
  })
  it('opens with the passphrase as it was written down, and each collection is in the trail', async () => {
    const answer = await collect(made.token, '  Seven invented  words that nobody has used ')
    expect([answer.status, answer.headers.get('content-type'), answer.headers.get('cache-control')]).toEqual([200, 'application/pdf', 'no-store'])
    expect(String(answer.body).slice(0, 5)).toBe('%PDF-')
    expect(await trail(made.delivery.id)).toEqual(['delivery.collected'])
  })
  it('is refused with another passphrase, without one, and with another link', async () => {
    const wrong = await collect(made.token, 'seven invented words')
    expect([wrong.status, wrong.body.code, wrong.headers.get('content-type')]).toEqual([422, 'not-valid', expect.stringContaining('json')])
    expect((await collect(made.token, ' ')).status).toBe(422)
    expect((await collect('x'.repeat(43), PASSPHRASE)).status).toBe(404)
    expect((await trail(made.delivery.id)).at(-1)).toBe('delivery.collect-refused')
  })
  it('after ten wrong ones even the right one has to wait', async () => {
    const { token } = await mailed()
    for (let wrong = 0; wrong < 10; wrong++) await collect(token, `wrong ${wrong}`)
    expect((await collect(token, PASSPHRASE)).status).toBe(429)
  })
  it('asks who collects: the physician it went to, the others of the practice, and those it named', async () => {
    const { token, delivery, practice, physician } = await mailed()
    const colleague = await t.makePhysician({ practiceId: practice.id, name: 'Dr Aaron Invented' })
    const delegate = await addDelegate(admin, practice.id, { name: 'Bea Invented', duty: 'secretary', phone: '' })
    const ended = await addDelegate(admin, practice.id, { name: 'Cal Invented', duty: 'secretary', phone: '' })
    await endDelegate(admin, ended.id)
    expect((await askWho(token, PASSPHRASE)).body).toEqual([
      { id: physician.id, name: physician.name, duty: '' }, { id: colleague.id, name: 'Dr Aaron Invented', duty: '' }, { id: delegate.id, name: 'Bea Invented', duty: 'secretary' },
    ])
    expect((await collectAs(token, PASSPHRASE, delegate.id)).status).toBe(200)
    expect(await lastData(delivery.id)).toMatchObject({ collector: { kind: 'delegate', id: delegate.id } })
    const [row] = (await dispatchPage(t.db, { siteIds: [room.site.id] }, { page: 1, pageSize: 50 })).rows.filter(each => each.id === delivery.id)
    expect([row?.collected, row?.collectedBy]).toEqual([1, 'Bea Invented'])
  })
  it('gives it to nobody else, and tells no name without the passphrase', async () => {
    const { token, delivery, practice } = await mailed()
    const ended = await addDelegate(admin, practice.id, { name: 'Cal Invented', duty: 'secretary', phone: '' })
    await endDelegate(admin, ended.id)
    const other = await t.makePhysician()
    for (const id of [ended.id, other.id]) {
      const answer = await collectAs(token, PASSPHRASE, id)
      expect([answer.status, answer.body.fields]).toEqual([422, [expect.objectContaining({ path: 'collectorId' })]])
    }
    expect((await collectAs(token, PASSPHRASE, undefined)).status).toBe(422)
    expect(JSON.stringify((await askWho(token, 'wrong words')).body)).not.toContain('Dr ')
    expect(await trail(delivery.id)).toEqual(['delivery.collect-refused', 'delivery.collect-refused', 'delivery.collect-refused'])
  })
  it('collecting is no receipt: the button is', async () => {
    expect((await call('GET', `/api/acknowledge/${made.token}`)).body).toMatchObject({ collect: true, acknowledgedAt: null })
  })
  it('works for 30 days and no longer', async () => {
    const { token } = await mailed()
    t.clock.minutes(30 * 1440 - 1)
    expect((await collect(token, PASSPHRASE)).status).toBe(200)
    t.clock.minutes(2)
    expect((await collect(token, PASSPHRASE)).status).toBe(410)
    t.clock.set(TEST_NOW)
  })
  it('ends when the delivery is withdrawn', async () => {
    const { token, delivery } = await mailed()
    await withdrawDelivery(admin, { id: delivery.id, reason: 'Sent to the wrong practice' })
    expect((await collect(token, PASSPHRASE)).status).toBe(410)
    expect((await call('GET', `/api/acknowledge/${token}`)).body).toMatchObject({ collect: false, withdrawn: true })
  })
})

it('a report that is attached cannot be collected by its link', async () => {
  const physician = await t.makePhysician()
  await room.signed({}, { physicianId: physician.id, copyPhysicianIds: [] })
  t.clock.minutes(2)
  await runOutboxOnce(t.context, { transport, owner: 'test' })
  const mail = await simpleParser(received.at(-1)!)
  expect(mail.attachments).toHaveLength(1)
  expect((await collect(/acknowledge\/(\S+)/.exec(mail.text ?? '')![1]!, PASSPHRASE)).status).toBe(404)
})

it('nobody collected a report whose PDF no longer fits its hash: nothing is handed out, and the trail says nothing else', async () => {
  const { token, delivery, physician } = await mailed()
  // Only somebody with the file itself can do this: the triggers stand in the way of everybody else.
  await sql`DROP TRIGGER report_pdf_no_update`.execute(t.db)
  await t.db.updateTable('reportPdf').set({ bytes: Buffer.from('%PDF-1.7 of somebody else') }).where('reportVersionId', '=', delivery.reportVersionId).execute()
  const answer = await collectAs(token, PASSPHRASE, physician.id)
  expect([answer.status >= 400, answer.headers.get('content-type')]).toEqual([true, expect.stringContaining('json')])
  expect(await trail(delivery.id)).toEqual([])
})
