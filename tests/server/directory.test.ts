import { simpleParser } from 'mailparser'
import { beforeAll, describe, expect, it } from 'vitest'
import { recipientById } from '#server/database/queries/recipients'
import { addPhysician, changePhysician } from '#server/services/change-physician'
import { addPractice, changePractice, noteHandedOver, renewPassphrase } from '#server/services/change-practice'
import { endDeskAccess, giveDeskAccess } from '#server/services/desk-access'
import { runOutboxOnce } from '#server/services/run-outbox'
import { setPassword } from '#server/services/set-up-link'
import { checkAddressCode, sendAddressCode, verifyOtherwise } from '#server/services/verify-address'
import { listPractices, sendWaiting, viewPractice } from '#server/services/view-directory'
import { nameKey } from '#shared/name-key'
import { practiceSchema } from '#shared/schemas/directory'
import { testContext } from './helpers'
import { readingRoom } from './reading-helpers'

const t = await testContext()
const room = await readingRoom(t)
const site = room.site
const admin = t.as(await t.makeUser({ name: 'Ada Sample', roles: [{ siteId: site.id, role: 'administrator' }] }))
let count = 0
const newPractice = async () => (await addPractice(admin, practiceSchema.parse({ name: `Practice of ${++count}`, town: 'Sample Town', phone: '+00 55 0001' }))).id
async function newPhysician(changes: Partial<Parameters<typeof addPhysician>[1]> = {}) {
  const practiceId = changes.practiceId ?? await newPractice()
  const { id } = await addPhysician(admin, { name: `Dr Sam Sample${++count}`, title: 'MD', email: `sam${count}@practice.example`, phone: '', ...changes, practiceId })
  return { id, practiceId }
}
const physician = async (id: string) => await t.db.selectFrom('physician').selectAll().where('id', '=', id).executeTakeFirstOrThrow()
const detail = async ({ id, practiceId }: { id: string, practiceId: string }) => (await viewPractice(admin, practiceId)).physicians.find(each => each.id === id)!
const events = async (subjectId: string) => (await t.db.selectFrom('auditEvent').selectAll().where('subjectId', '=', subjectId).orderBy('seq').execute()).map(event => ({ name: event.name, data: JSON.parse(event.dataJson) as Record<string, unknown>, text: event.dataJson }))
/** What the mail server received: every message as text. */
const received: string[] = []
const transport = { send: async (_envelope: unknown, message: Buffer, beforeLastByte: () => Promise<void>) => {
  await beforeLastByte()
  received.push(message.toString())
  return { kind: 'accepted' as const }
}, close: () => undefined }
const round = () => runOutboxOnce(t.context, { transport, owner: 'test' })
/** The code as the physician reads it in the mail that came last. */
async function codeInMail() {
  await round()
  const mail = await simpleParser(received.at(-1)!)
  return { mail, code: /Code: (\S+)/.exec(mail.text ?? '')?.[1] ?? '' }
}
const refused = (field: string) => expect.objectContaining({ code: 'not-valid', options: expect.objectContaining({ fields: [expect.objectContaining({ path: field })] }) })

describe('practices', () => {
  it('are found by name, town and physician; what is left to do can be asked for', async () => {
    const { practiceId } = await newPhysician({ name: 'Dr Zora Findling' })
    const found = async (search: string, show: 'all' | 'to-do' = 'all') => (await listPractices(admin, { search, show, page: 1, pageSize: 25 })).rows.map(row => row.id)
    expect(await found('findling')).toEqual([practiceId])
    expect(await found('sample town findl')).toEqual([practiceId])
    expect(await found('findling', 'to-do')).toEqual([practiceId])
    expect(await found('100%')).toEqual([])
  })
  it('two of one name in one town are refused, since nobody could tell them apart', async () => {
    await addPractice(admin, practiceSchema.parse({ name: 'Élan Practice', town: 'Here' }))
    await expect(addPractice(admin, practiceSchema.parse({ name: 'elan practice', town: 'here' }))).rejects.toEqual(refused('name'))
    await expect(addPractice(admin, practiceSchema.parse({ name: 'elan practice', town: 'There' }))).resolves.toBeDefined()
  })
  it('a change is in the trail with what stood there before', async () => {
    const id = await newPractice()
    await changePractice(admin, id, { phone: '+00 55 0002' })
    await changePractice(admin, id, { phone: '+00 55 0002' })
    expect((await events(id)).map(event => [event.name, event.data])).toEqual([['practice.added', {}], ['practice.changed', { changes: [{ field: 'phone', before: '+00 55 0001', after: '+00 55 0002' }] }]])
  })
})

describe('the passphrase of a practice', () => {
  it('is answered once, kept sealed, and stands nowhere else', async () => {
    const id = await newPractice()
    const { passphrase } = await renewPassphrase(admin, id)
    expect(passphrase.split(' ').length).toBeGreaterThan(5)
    const row = await t.db.selectFrom('practice').selectAll().where('id', '=', id).executeTakeFirstOrThrow()
    expect(row.passphraseSealed).not.toContain(passphrase)
    expect(t.keys.unseal(row.passphraseSealed!)).toBe(passphrase)
    for (const place of [await viewPractice(admin, id), await listPractices(admin, { search: '', show: 'all', page: 1, pageSize: 25 }), await events(id)]) expect(JSON.stringify(place)).not.toContain(passphrase)
  })
  it('nothing is mailed before it is handed over, nor after it was replaced', async () => {
    const { id, practiceId } = await newPhysician()
    await verifyOtherwise(admin, id, 'Seen on the letterhead by A. Sample')
    const because = async () => (await recipientById(t.db, id, '2026-12-02'))!.because
    expect(await because()).toBe('the practice has no passphrase yet')
    await renewPassphrase(admin, practiceId)
    expect(await because()).toBe('the practice was not given its passphrase yet')
    await noteHandedOver(admin, practiceId, { by: 'telephone', on: '2026-12-01' })
    expect(await because()).toBe('')
    expect((await viewPractice(admin, practiceId)).passphrase).toMatchObject({ state: 'handed-over', handedOverOn: '2026-12-01', by: 'telephone' })
    await renewPassphrase(admin, practiceId)
    expect(await because()).toBe('the practice was not given its passphrase yet')
    expect((await events(practiceId)).filter(event => event.name.startsWith('practice.passphrase')).map(event => event.data)).toEqual([{ replaced: false }, { by: 'telephone', on: '2026-12-01' }, { replaced: true }])
  })
  it('a hand-over is neither before there is one nor in the future', async () => {
    const id = await newPractice()
    await expect(noteHandedOver(admin, id, { by: 'letter', on: '2026-12-01' })).rejects.toMatchObject({ code: 'not-valid' })
    await renewPassphrase(admin, id)
    await expect(noteHandedOver(admin, id, { by: 'letter', on: '2026-12-03' })).rejects.toEqual(refused('on'))
  })
})

describe('verifying an address', () => {
  it('a code of ten characters goes to the mailbox, not into the subject, and is stored as a hash only', async () => {
    const made = await newPhysician()
    await sendAddressCode(admin, { physicianId: made.id })
    expect((await detail(made)).code).toMatchObject({ mail: 'waiting', triesLeft: 5 })
    const { mail, code } = await codeInMail()
    expect(code.replace('-', '')).toMatch(/^[A-Z2-9]{10}$/)
    expect(mail.subject).not.toContain(code)
    expect((mail.to as { text: string }).text).toBe((await physician(made.id)).email)
    expect((await detail(made)).code).toMatchObject({ mail: 'sent', expiresAt: '2026-12-05T09:00:00.000Z' })
    const stored = JSON.stringify([await t.db.selectFrom('oneTimeLink').selectAll().execute(), await t.db.selectFrom('outboxMail').selectAll().execute(), await events(made.id)])
    for (const form of [code, code.replace('-', '')]) expect(stored).not.toContain(form)
  })
  it('works once, however it is typed', async () => {
    const made = await newPhysician()
    await sendAddressCode(admin, { physicianId: made.id })
    const { code } = await codeInMail()
    await checkAddressCode(admin, made.id, ` ${code.toLowerCase().replace('-', ' ')} `)
    expect(await physician(made.id)).toMatchObject({ emailVerifiedAt: t.context.clock().toISOString(), emailVerifiedBy: 'code' })
    await expect(checkAddressCode(admin, made.id, code)).rejects.toEqual(refused('code'))
    expect((await events(made.id)).map(event => event.name)).toEqual(['physician.added', 'physician.code-sent', 'physician.address-verified', 'physician.code-refused'])
  })
  it('is worth nothing after 72 hours, and one minute before it works', async () => {
    const [late, early] = [await newPhysician(), await newPhysician()]
    await sendAddressCode(admin, { physicianId: late.id })
    const lateCode = (await codeInMail()).code
    await sendAddressCode(admin, { physicianId: early.id })
    const earlyCode = (await codeInMail()).code
    t.clock.minutes(72 * 60 - 1)
    await checkAddressCode(admin, early.id, earlyCode)
    t.clock.minutes(1)
    await expect(checkAddressCode(admin, late.id, lateCode)).rejects.toMatchObject({ options: { fields: [{ path: 'code', message: expect.stringContaining('72 hours') }] } })
    expect((await physician(late.id)).emailVerifiedAt).toBeNull()
    t.clock.set('2026-12-02T09:00:00.000Z')
  })
  it('is worth nothing for another physician', async () => {
    const [one, other] = [await newPhysician(), await newPhysician()]
    await sendAddressCode(admin, { physicianId: one.id })
    const { code } = await codeInMail()
    await sendAddressCode(admin, { physicianId: other.id })
    await expect(checkAddressCode(admin, other.id, code)).rejects.toEqual(refused('code'))
  })
  it('after five wrong ones the right one is refused too', async () => {
    const made = await newPhysician()
    await sendAddressCode(admin, { physicianId: made.id })
    const { code } = await codeInMail()
    for (let wrong = 0; wrong < 5; wrong++) await expect(checkAddressCode(admin, made.id, 'AAAAA-AAAAA')).rejects.toEqual(refused('code'))
    await expect(checkAddressCode(admin, made.id, code)).rejects.toMatchObject({ options: { fields: [{ message: expect.stringContaining('five times') }] } })
    expect((await physician(made.id)).emailVerifiedAt).toBeNull()
  })
  it('a new code ends the earlier one, and its mail if it has not left', async () => {
    const made = await newPhysician()
    await sendAddressCode(admin, { physicianId: made.id })
    const first = (await codeInMail()).code
    await sendAddressCode(admin, { physicianId: made.id })
    const before = received.length
    await sendAddressCode(admin, { physicianId: made.id })
    const second = (await codeInMail()).code
    expect(received.length).toBe(before + 1)
    await expect(checkAddressCode(admin, made.id, first)).rejects.toEqual(refused('code'))
    await checkAddressCode(admin, made.id, second)
    expect((await physician(made.id)).emailVerifiedAt).not.toBeNull()
  })
  it('another check needs a reason, which is kept and shown', async () => {
    const made = await newPhysician()
    await verifyOtherwise(admin, made.id, 'Compared with the register of the chamber on 1 December.')
    expect((await detail(made)).verified).toMatchObject({ by: 'other', note: 'Compared with the register of the chamber on 1 December.' })
    expect((await events(made.id)).at(-1)).toMatchObject({ name: 'physician.address-verified', data: { by: 'other', reason: 'Compared with the register of the chamber on 1 December.' } })
  })
  it('a changed address loses its verification and the code that was mailed to the earlier one', async () => {
    const made = await newPhysician()
    await sendAddressCode(admin, { physicianId: made.id })
    const { code } = await codeInMail()
    await changePhysician(admin, made.id, { email: 'New.Address@practice.example' })
    await expect(checkAddressCode(admin, made.id, code)).rejects.toEqual(refused('code'))
    await verifyOtherwise(admin, made.id, 'Telephoned the practice, A. Sample')
    await changePhysician(admin, made.id, { phone: '1' })
    expect((await physician(made.id)).emailVerifiedAt).not.toBeNull()
    await changePhysician(admin, made.id, { email: 'third@practice.example' })
    expect(await physician(made.id)).toMatchObject({ email: 'third@practice.example', emailVerifiedAt: null, emailVerifiedBy: null, emailVerifiedNote: '' })
  })
})

describe('namesakes', () => {
  it.each([['Dr Jana Müller', 'Muller, Jana', true], ['Prof. Łucja Østby', 'lucja ostby', true], ['Dr Jan Muller', 'Dr Jana Muller', false]])('%s and %s: %s', (one, other, same) => expect(nameKey(one) === nameKey(other)).toBe(same))
  it('are shown with practice and town, both ways', async () => {
    const one = await newPhysician({ name: 'Dr Jana Müller' })
    const other = await newPhysician({ name: 'Prof Jana Muller' })
    expect((await detail(one)).namesakes).toEqual([expect.objectContaining({ id: other.id, town: 'Sample Town', practiceId: other.practiceId })])
    expect((await detail(other)).namesakes.map(each => each.id)).toEqual([one.id])
  })
  it('one person does not stand twice in a practice; two may share its mailbox', async () => {
    const { practiceId } = await newPhysician({ name: 'Dr Ada Once', email: 'desk@practice.example' })
    await expect(newPhysician({ practiceId, name: 'dr ada once', email: 'DESK@practice.example' })).rejects.toEqual(refused('name'))
    await expect(newPhysician({ practiceId, name: 'Dr Bea Twice', email: 'desk@practice.example' })).resolves.toBeDefined()
  })
})

describe('what waits for a physician', () => {
  let made: { id: string, practiceId: string }
  /** A report signed for a physician of the directory; its deliveries. */
  async function signedFor(physicianId: string) {
    const { name } = await physician(physicianId)
    // The reader is told who cannot be reached and signs all the same.
    const { reportId } = await room.signed({ resolved: [{ key: `recipient/${name}`, reason: 'The administrator delivers it by hand.' }] }, { physicianId, copyPhysicianIds: [] })
    return (await t.db.selectFrom('delivery').innerJoin('reportVersion', 'reportVersion.id', 'delivery.reportVersionId').selectAll('delivery').where('reportId', '=', reportId).executeTakeFirstOrThrow()).id
  }
  const state = async (id: string) => await t.db.selectFrom('delivery').select(['state', 'stateReason']).where('id', '=', id).executeTakeFirstOrThrow()
  const openTasks = async (id: string) => (await t.db.selectFrom('task').select('kind').where('subjectId', '=', id).where('doneAt', 'is', null).execute()).map(task => task.kind)
  async function complete() {
    const { id, practiceId } = await newPhysician()
    await verifyOtherwise(admin, id, 'Telephoned the practice, A. Sample')
    await renewPassphrase(admin, practiceId)
    await noteHandedOver(admin, practiceId, { by: 'letter', on: '2026-12-01' })
    return { id, practiceId }
  }
  beforeAll(async () => {
    made = await complete()
  })

  it('a report for an entry that is not complete waits with a task, is counted, and goes when the entry is complete', async () => {
    const entry = await newPhysician()
    const deliveryId = await signedFor(entry.id)
    expect([await state(deliveryId), await openTasks(deliveryId)]).toEqual([{ state: 'given-up', stateReason: 'the address is not verified' }, ['deliver-by-hand']])
    expect(await detail(entry)).toMatchObject({ waiting: 1, because: 'the address is not verified' })
    await expect(sendWaiting(admin, entry.id)).rejects.toMatchObject({ code: 'not-valid' })
    await verifyOtherwise(admin, entry.id, 'Telephoned the practice, A. Sample')
    await renewPassphrase(admin, entry.practiceId)
    await noteHandedOver(admin, entry.practiceId, { by: 'letter', on: '2026-12-01' })
    expect(await sendWaiting(admin, entry.id)).toEqual({ sent: 1 })
    await round()
    expect([(await state(deliveryId)).state, await openTasks(deliveryId), (await detail(entry)).waiting]).toEqual(['sent', [], 0])
  })
  it('someone else\'s site is not sent from here', async () => {
    const entry = await newPhysician()
    await signedFor(entry.id)
    const elsewhere = t.as(await t.makeUser({ roles: [{ siteId: (await t.makeSite()).id, role: 'administrator' }] }))
    expect((await viewPractice(elsewhere, entry.practiceId)).physicians[0]!.waiting).toBe(0)
  })
  it.each([
    ['they left meanwhile', (id: string) => changePhysician(admin, id, { leftOn: '2026-12-02' }), 'the physician left the practice'],
    ['the address changed meanwhile', (id: string) => changePhysician(admin, id, { email: 'elsewhere@practice.example' }), 'the address is not verified'],
    ['the passphrase was replaced meanwhile', async (_id: string, practiceId: string) => void await renewPassphrase(admin, practiceId), 'the practice was not given its passphrase yet'],
  ] as const)('%s: what was queued before does not leave, and a person is told', async (_what, change, because) => {
    made = await complete()
    const deliveryId = await signedFor(made.id)
    await change(made.id, made.practiceId)
    t.clock.minutes(2)
    const before = received.length
    await round()
    expect([await state(deliveryId), await openTasks(deliveryId), received.length]).toEqual([{ state: 'given-up', stateReason: because }, ['delivery-given-up'], before])
  })
  it('a verified new address gets it, the earlier one does not', async () => {
    made = await complete()
    const deliveryId = await signedFor(made.id)
    await changePhysician(admin, made.id, { email: 'moved@practice.example' })
    await verifyOtherwise(admin, made.id, 'Telephoned the practice, A. Sample')
    t.clock.minutes(2)
    await round()
    expect(await state(deliveryId)).toEqual({ state: 'given-up', stateReason: 'the address in the directory changed' })
    await sendWaiting(admin, made.id)
    await round()
    expect((await simpleParser(received.at(-1)!)).to).toMatchObject({ text: 'moved@practice.example' })
  })
  it('a day of leaving that lies ahead stops nothing yet', async () => {
    made = await complete()
    await changePhysician(admin, made.id, { leftOn: '2026-12-31' })
    expect((await recipientById(t.db, made.id, '2026-12-30'))!.reachable).toBe(true)
    expect((await recipientById(t.db, made.id, '2026-12-31'))!.because).toBe('the physician left the practice')
    await changePhysician(admin, made.id, { leftOn: null })
    expect((await recipientById(t.db, made.id, '2026-12-31'))!.reachable).toBe(true)
  })
})

describe('access to the desk', () => {
  const holdings = async (userId: string) => await t.db.selectFrom('roleHolding').select(['siteId', 'role', 'endsOn']).where('userId', '=', userId).execute()
  it('needs a verified address; then makes an account with one role, and a link that works once', async () => {
    const made = await newPhysician()
    await expect(giveDeskAccess(admin, { physicianId: made.id, siteId: site.id })).rejects.toMatchObject({ code: 'not-valid' })
    await verifyOtherwise(admin, made.id, 'Telephoned the practice, A. Sample')
    const { userId, link } = await giveDeskAccess(admin, { physicianId: made.id, siteId: site.id, byMail: false })
    expect(await holdings(userId)).toEqual([{ siteId: site.id, role: 'referring-physician', endsOn: null }])
    const token = link!.split('#')[1]!
    await setPassword(t.context, { token, password: 'lagoon-quartz-tulip-bridge' })
    await expect(setPassword(t.context, { token, password: 'lagoon-quartz-tulip-bridge' })).rejects.toMatchObject({ code: 'link-used' })
    expect((await detail(made)).access).toMatchObject({ userId, hasPassword: true })
    await expect(giveDeskAccess(admin, { physicianId: made.id, siteId: site.id })).rejects.toMatchObject({ code: 'not-valid' })
    await endDeskAccess(admin, made.id)
    expect([(await physician(made.id)).userId, (await holdings(userId)).map(holding => holding.endsOn)]).toEqual([null, ['2026-12-02']])
  })
  it('an account that has the address already is linked and keeps its password', async () => {
    const known = await t.makeUser({ email: 'both@practice.example', passwordHash: 'set', roles: [{ siteId: site.id, role: 'technologist' }] })
    const made = await newPhysician({ email: 'both@practice.example' })
    await verifyOtherwise(admin, made.id, 'Telephoned the practice, A. Sample')
    expect(await giveDeskAccess(admin, { physicianId: made.id, siteId: site.id })).toEqual({ userId: known.id, link: null, mailedTo: null, expiresAt: null })
    expect((await holdings(known.id)).map(holding => holding.role)).toEqual(['technologist', 'referring-physician'])
  })
  it('is given only at a site that the actor administers', async () => {
    const made = await newPhysician()
    await verifyOtherwise(admin, made.id, 'Telephoned the practice, A. Sample')
    await expect(giveDeskAccess(admin, { physicianId: made.id, siteId: (await t.makeSite()).id })).rejects.toMatchObject({ code: 'not-allowed' })
    expect((await physician(made.id)).userId).toBeNull()
  })
})
