import { describe, expect, it } from 'vitest'
import sharp from 'sharp'
import { listReferrals } from '#server/database/queries/referral-list'
import { initialsOf, mostWrongBirths, addLetterFile, answerLetter, openLetter, viewLetter } from '#server/services/answer-letter'
import { letterDays, noteAnswerSeen } from '#server/services/letters'
import { cancelReferral, declineReferral, receiveReferral, remind, returnReferral } from '#server/services/move-referral'
import { viewReferral } from '#server/services/view-referral'
import { policies } from '#shared/policies/index'
import { askedBy, reasonsFor, returnReasons, type ReturnReasonId } from '#shared/return-reasons'
import { returnSchema } from '#shared/schemas/letter'
import { clinic, eventNames } from './bench-helpers'
import { testContext } from './helpers'

const t = await testContext()
const c = await clinic(t)
const view = (id: string) => viewReferral(c.admin, id)
const mails = () => t.db.selectFrom('outboxMail').selectAll().where('template', '=', 'referrer-letter').orderBy('createdAt').execute()
async function tokenOfLastMail() {
  const mail = (await mails()).at(-1)!
  return (JSON.parse(t.keys.unseal(mail.dataSealed)) as { token: string }).token
}
const call = (token: string) => ({ token, address: '192.0.2.7' })
const tasks = (subjectId: string) => t.db.selectFrom('task').selectAll().where('subjectId', '=', subjectId).execute()

/** A received referral that was returned for these reasons, with the token of its mail. */
async function returned(reasons: ReturnReasonId[], changes: object = {}, note = '') {
  const id = await c.draft(changes)
  await receiveReferral(c.admin, { id })
  await returnReferral(c.neurologist, { id, reasons, note })
  return { id, token: await tokenOfLastMail() }
}

describe('what a list of reasons asks', () => {
  it.each(returnReasons.map(reason => [reason.id, reason] as const))('%s asks for something', (_, reason) => {
    const asked = askedBy([reason.id])
    expect(asked.fields.length > 0 || asked.words || asked.file).toBe(true)
    expect(asked.needed.every(field => asked.fields.includes(field))).toBe(true)
  })
  it('is ticked at first by what is missing', () => expect(reasonsFor(['clinicalQuestion', 'cautions.cardiac-device', 'physicianId'])).toEqual(['question', 'cautions']))
  it('needs a reason, and words for another question', () => {
    expect(returnSchema.safeParse({ reasons: [], note: '' }).success).toBe(false)
    expect(returnSchema.safeParse({ reasons: ['other'], note: '' }).success).toBe(false)
  })
})

describe('a referral returned for information', () => {
  it('mails a link that says nothing of the patient, in one transaction with the move', async () => {
    const patient = await t.makePatient({ familyName: 'Oddname', givenName: 'Élise', birthDate: '1961-05-09' })
    const { id, token } = await returned(['examination'], { patientId: patient.id, examination: '' }, 'Is the reflex there?')
    const mail = (await mails()).at(-1)!
    const sealed = t.keys.unseal(mail.dataSealed)
    for (const word of ['Oddname', 'Élise', '1961', 'reflex', patient.recordNumber]) expect(sealed).not.toContain(word)
    expect(await view(id)).toMatchObject({ state: 'returned', stateReason: 'The examination is missing; Is the reflex there?', letters: [{ kind: 'information', labels: ['The examination is missing'], closedAt: null, mailState: 'queued' }] })
    expect((await t.db.selectFrom('oneTimeLink').select('tokenHash').where('purpose', '=', 'referrer-letter').execute()).map(row => row.tokenHash)).not.toContain(token)
    expect(await viewLetter(t.context, call(token))).toEqual(expect.objectContaining({ number: (await view(id)).number, initials: 'É. O.', state: 'open' }))
    expect(JSON.stringify(await viewLetter(t.context, call(token)))).not.toMatch(/Oddname|Élise|1961|reflex/)
  })
  it('shows what is asked only with the date of birth, and only what was asked', async () => {
    const { id, token } = await returned(['side', 'other'], { bodySite: 'hand' }, 'Which finger?')
    await expect(openLetter(t.context, { ...call(token), birthDate: '1980-01-01' })).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ path: 'birthDate' }] } })
    const opened = await openLetter(t.context, { ...call(token), birthDate: '1974-03-14' })
    expect(opened).toMatchObject({ note: 'Which finger?', asked: { fields: ['side', 'bodySite'], words: true }, values: { side: 'right', bodySite: 'hand' } })
    expect(Object.keys(opened.values)).toEqual(['side', 'bodySite'])
    expect(await eventNames(t, id)).toEqual(expect.arrayContaining(['letter.mailed', 'letter.refused', 'letter.opened']))
  })
  it('comes back by itself when it is completed, with what changed, and is marked until somebody noted it', async () => {
    const { id, token } = await returned(['examination', 'cautions', 'letter', 'other'], { examination: '' }, 'Since when?')
    const { pass } = await openLetter(t.context, { ...call(token), birthDate: '1974-03-14' })
    const values = { examination: 'Power 4/5', cautions: { 'cardiac-device': 'yes' as const, 'temporary-pacing-wire': 'no' as const }, clinicalQuestion: 'Smuggled in' }
    await expect(answerLetter(t.context, { ...call(token), pass, values, words: '' })).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ path: 'words' }, { path: 'file' }] } })
    const png = await sharp({ create: { width: 4, height: 4, channels: 3, background: 'white' } }).png().toBuffer()
    expect(await addLetterFile(t.context, { ...call(token), pass, name: 'scan.png', bytes: png })).toMatchObject({ originalName: 'scan.png' })
    await answerLetter(t.context, { ...call(token), pass, values, words: 'Since May' })
    const back = await view(id)
    expect(back).toMatchObject({ state: 'received', examination: 'Power 4/5', clinicalQuestion: 'Median nerve at the wrist?', letters: [{ closedBecause: 'answered', answer: { words: 'Since May', files: 1 }, seenAt: null }], uploads: [{ createdBy: 'the referring practice' }] })
    expect(back.letters[0]!.answer!.changes.map(change => [change.field, change.before])).toEqual([['examination', ''], ['cautions', { 'cardiac-device': 'no', 'temporary-pacing-wire': 'no' }]])
    const list = () => listReferrals(t.db, { siteIds: [c.site.id], states: ['received'], search: '', sort: 'stateSince', direction: 'asc', page: 1, pageSize: 50, cameBack: true, clocks: policies.clocks.initial, now: t.context.clock() })
    expect(await list()).toMatchObject({ total: 1, cameBack: 1, rows: [{ id, cameBack: true, nextStep: 'Look at what came back' }] })
    expect(await viewLetter(t.context, call(token))).toMatchObject({ state: 'done' })
    await expect(answerLetter(t.context, { ...call(token), pass, values, words: 'Again' })).rejects.toMatchObject({ code: 'wrong-state' })
    await noteAnswerSeen(c.neurologist, { id })
    expect(await list()).toMatchObject({ total: 0, cameBack: 0 })
  })
  it('takes nothing without the date of birth, nor a pass of another link', async () => {
    const [one, other] = [await returned(['side']), await returned(['side'])]
    const { pass } = await openLetter(t.context, { ...call(other.token), birthDate: '1974-03-14' })
    for (const wrong of ['', 'x'.repeat(43), pass]) await expect(answerLetter(t.context, { ...call(one.token), pass: wrong, values: { side: 'left' }, words: '' })).rejects.toMatchObject({ code: 'not-allowed' })
    await expect(addLetterFile(t.context, { ...call(one.token), pass, name: 'a', bytes: new Uint8Array(3) })).rejects.toMatchObject({ code: 'not-allowed' })
    expect(await view(one.id)).toMatchObject({ state: 'returned', side: 'right' })
  })
  it('locks after wrong dates of birth, for good until the link is sent again', async () => {
    const { id, token } = await returned(['side'])
    for (let n = 0; n < mostWrongBirths; n++) await openLetter(t.context, { ...call(token), birthDate: '1980-01-01' }).catch(() => undefined)
    await expect(openLetter(t.context, { ...call(token), birthDate: '1974-03-14' })).rejects.toMatchObject({ code: 'too-many-requests' })
    expect(await viewLetter(t.context, call(token))).toMatchObject({ state: 'locked' })
    expect(await remind(c.admin, { id })).toBe(true)
    await expect(openLetter(t.context, { ...call(await tokenOfLastMail()), birthDate: '1974-03-14' })).resolves.toMatchObject({ values: { side: 'right' } })
    expect(await view(id)).toMatchObject({ letters: [{ reminders: 1 }] })
  })
  it('is withdrawn meanwhile: the link says so and changes nothing, and a mail that has not left stays', async () => {
    const { id, token } = await returned(['side'])
    const { pass } = await openLetter(t.context, { ...call(token), birthDate: '1974-03-14' })
    await cancelReferral(c.admin, { id, reason: 'no longer wanted' })
    expect(await viewLetter(t.context, call(token))).toMatchObject({ state: 'withdrawn' })
    await expect(answerLetter(t.context, { ...call(token), pass, values: { side: 'left' }, words: '' })).rejects.toMatchObject({ code: 'wrong-state' })
    expect(await view(id)).toMatchObject({ state: 'cancelled', side: 'right' })
    expect((await mails()).at(-1)).toMatchObject({ state: 'withdrawn', dataSealed: '' })
  })
  it('was answered by telephone: received by hand, the link is no longer needed', async () => {
    const { id, token } = await returned(['side'])
    await receiveReferral(c.admin, { id })
    expect(await view(id)).toMatchObject({ state: 'received', letters: [{ closedBecause: 'received' }] })
    expect(await viewLetter(t.context, call(token))).toMatchObject({ state: 'withdrawn' })
  })
  it('is too old after its days, and an unknown link is not found', async () => {
    const { token } = await returned(['side'])
    t.clock.advance((letterDays * 24 * 60 + 1) * 60_000)
    await expect(viewLetter(t.context, call(token))).rejects.toMatchObject({ code: 'link-used' })
    t.clock.set('2026-12-02T09:00:00.000Z')
    await expect(viewLetter(t.context, call('x'.repeat(43)))).rejects.toMatchObject({ code: 'not-found' })
    for (let n = 0; n < 40; n++) await viewLetter(t.context, { token: `guess${n}`.padEnd(43, 'x'), address: '192.0.2.66' }).catch(() => undefined)
    await expect(viewLetter(t.context, { token, address: '192.0.2.66' })).rejects.toMatchObject({ code: 'too-many-requests' })
    await expect(viewLetter(t.context, call(token))).resolves.toMatchObject({ state: 'open' })
  })
  it.each([
    ['has no verified address', { emailVerifiedAt: null }, 'the address is not verified'],
    ['left the practice', { leftOn: '2026-01-01' }, 'the physician left the practice'],
  ])('a physician who %s gets no mail; it is a task, which ends when it is received', async (_, changes, because) => {
    const before = (await mails()).length
    const physician = await t.makePhysician(changes)
    const id = await c.draft({ physicianId: physician.id })
    await receiveReferral(c.admin, { id })
    await returnReferral(c.neurologist, { id, reasons: ['side'], note: '' })
    expect((await mails()).length).toBe(before)
    expect(await tasks(id)).toMatchObject([{ kind: 'letter-by-hand', doneAt: null, sentence: expect.stringContaining(because) as string }])
    expect(await remind(c.admin, { id })).toBe(false)
    await receiveReferral(c.admin, { id })
    expect((await tasks(id))[0]?.doneAt).not.toBeNull()
  })
})

describe('a referral declined with advice', () => {
  it('mails a link to the advice, which stands behind the date of birth, and notes that it was read', async () => {
    const id = await c.draft()
    await receiveReferral(c.admin, { id })
    await declineReferral(c.neurologist, { id, reason: 'Image the cervical spine first.' })
    const token = await tokenOfLastMail()
    expect(t.keys.unseal((await mails()).at(-1)!.dataSealed)).not.toContain('spine')
    expect(await viewLetter(t.context, call(token))).toMatchObject({ kind: 'advice', state: 'open' })
    expect(await openLetter(t.context, { ...call(token), birthDate: '1974-03-14' })).toMatchObject({ note: 'Image the cervical spine first.', values: {} })
    expect(await view(id)).toMatchObject({ state: 'declined', letters: [{ kind: 'advice', closedBecause: 'read' }] })
    await expect(answerLetter(t.context, { ...call(token), pass: (await openLetter(t.context, { ...call(token), birthDate: '1974-03-14' })).pass, values: {}, words: 'x' })).rejects.toMatchObject({ code: 'not-found' })
  })
  it('is silent when asked to be', async () => {
    const before = (await mails()).length
    const id = await c.draft()
    await receiveReferral(c.admin, { id })
    await declineReferral(c.neurologist, { id, reason: 'Told by telephone.', tell: false })
    expect((await mails()).length).toBe(before)
  })
})

it.each([
  [{ givenName: 'Jana', familyName: 'nováková' }, 'J. N.'], [{ givenName: '', familyName: 'Ødegård' }, 'Ø.'], [{ givenName: '𝒜b', familyName: 'X' }, '𝒜. X.'],
])('initials of %o are %s', (name, initials) => expect(initialsOf(name)).toBe(initials))
