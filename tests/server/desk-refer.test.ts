import type { EventHandler } from 'h3'
import { beforeAll, describe, expect, it } from 'vitest'
import { undoMerge } from '#server/services/merge-patients'
import { acceptReferral, returnReferral } from '#server/services/move-referral'
import { identifyPatient } from '#server/services/identify-patient'
import { referralView } from '#server/database/queries/referrals'
import { nextStep } from '#shared/next-step'
import { deskDraftSchema, deskProblems, type DeskDraftValues, type DeskDraftView, type DeskForm, type DeskPage, type DeskRequest, type DeskSent } from '#shared/schemas/desk'
import { testContext } from './helpers'
import { cookieFor, routeFiles, serve } from './http'

/** A referral is written at the desk, sent, identified by the clinic, returned and answered: through the real routes. */
const t = await testContext()
const site = await t.makeSite()
const admin = t.as(await t.makeUser({ roles: [{ siteId: site.id, role: 'administrator' }] }))
const files = routeFiles().filter(route => route.path !== '/api/auth/**' && route.path !== '/api/**')
const routes = await Promise.all(files.map(async route => ({ ...route, handler: (await import(/* @vite-ignore */ route.file) as { default: EventHandler }).default })))
const { call } = serve(t, routes)

async function makeReferrer(name: string) {
  const user = await t.makeUser({ name, roles: [{ siteId: site.id, role: 'referring-physician' }] })
  const physician = await t.makePhysician({ name, userId: user.id })
  return { user, physician, cookie: await cookieFor(t, user) }
}
const [own, other] = [await makeReferrer('Dr Own Sample'), await makeReferrer('Dr Other Sample')]
type Referrer = typeof own

const typed = (changes: Partial<DeskDraftValues> = {}): DeskDraftValues => deskDraftSchema.parse({
  physicianId: own.physician.id, siteId: site.id, familyName: 'Sample', givenName: 'Vera', birthDate: '1971-05-02', phone: '555 0142', clinicalQuestion: 'Median nerve at the wrist?', side: 'right',
  symptoms: 'Numb at night', examination: 'Thumb weak', cautions: { 'cardiac-device': 'no', 'temporary-pacing-wire': 'no' }, ...changes,
})
const ask = async <T>(who: Referrer, method: string, path: string, body?: object) => {
  const answer = await call(method, path, { cookie: who.cookie, body })
  return { status: answer.status, body: answer.body as unknown as T }
}
const begin = async (who: Referrer, values = typed()) => (await ask<DeskDraftView>(who, 'POST', '/api/desk/drafts', values)).body
const send = async (who: Referrer, draft: DeskDraftView, values = draft.values, revision = draft.revision) => await ask<DeskSent & { fields?: { path: string }[] }>(who, 'POST', `/api/desk/drafts/${draft.id}/send`, { revision, values })
const sent = async (values = typed()) => (await send(own, await begin(own, values))).body
const patientsNow = async () => (await t.db.selectFrom('patient').select(eb => eb.fn.countAll<number>().as('n')).executeTakeFirstOrThrow()).n

describe('a draft', () => {
  it('is kept as typed, half a date and all, and is its writer\'s alone', async () => {
    const draft = await begin(own, typed({ familyName: 'Half', birthDate: '2 Ma', symptoms: ' two  spaces ' }))
    const saved = await ask<{ revision: number }>(own, 'PUT', `/api/desk/drafts/${draft.id}`, { revision: 1, values: { ...draft.values, examination: '' } })
    expect(saved.body.revision).toBe(2)
    expect((await ask<DeskDraftView>(own, 'GET', `/api/desk/drafts/${draft.id}`)).body.values).toMatchObject({ birthDate: '2 Ma', symptoms: ' two  spaces ', examination: '' })
    expect((await ask<DeskForm>(own, 'GET', '/api/desk/drafts')).body.drafts.map(line => line.who)).toEqual(['Half, Vera'])
    expect((await ask<DeskForm>(other, 'GET', '/api/desk/drafts')).body.drafts).toEqual([])
    expect((await ask(own, 'DELETE', `/api/desk/drafts/${draft.id}`)).status).toBe(200)
    expect((await ask(own, 'GET', `/api/desk/drafts/${draft.id}`)).status).toBe(404)
  })
  it('of two windows the second that saves is told, with what stands', async () => {
    const draft = await begin(own)
    await ask(own, 'PUT', `/api/desk/drafts/${draft.id}`, { revision: 1, values: typed({ phone: '1' }) })
    const late = await ask<{ code: string, details: { theirs: { values: DeskDraftValues } } }>(own, 'PUT', `/api/desk/drafts/${draft.id}`, { revision: 1, values: typed({ phone: '2' }) })
    expect([late.status, late.body.code, late.body.details.theirs.values.phone]).toEqual([409, 'changed-meanwhile', '1'])
    expect((await send(own, draft)).status).toBe(409)
    await ask(own, 'DELETE', `/api/desk/drafts/${draft.id}`)
  })
  it('makes no patient, no referral and nothing of the worklist', async () => {
    const before = [await patientsNow(), (await t.db.selectFrom('referral').select('id').execute()).length]
    const draft = await begin(own)
    expect([await patientsNow(), (await t.db.selectFrom('referral').select('id').execute()).length]).toEqual(before)
    await ask(own, 'DELETE', `/api/desk/drafts/${draft.id}`)
  })
  it('twenty wait at most', async () => {
    const drafts: DeskDraftView[] = []
    for (let n = 0; n < 20; n++) drafts.push(await begin(other, typed({ physicianId: other.physician.id })))
    expect((await ask(other, 'POST', '/api/desk/drafts', typed())).status).toBe(422)
    for (const { id } of drafts) await ask(other, 'DELETE', `/api/desk/drafts/${id}`)
  })
})

describe('what stands against sending', () => {
  it.each([
    [{ familyName: ' ' }, 'familyName'], [{ givenName: '' }, 'givenName'], [{ birthDate: '' }, 'birthDate'], [{ birthDate: '2 Ma' }, 'birthDate'], [{ phone: '' }, 'phone'],
    [{ clinicalQuestion: '' }, 'clinicalQuestion'], [{ side: null }, 'side'], [{ symptoms: '' }, 'symptoms'], [{ examination: '' }, 'examination'],
    [{ urgency: 'urgent' }, 'urgencyReason'], [{ siteId: null }, 'siteId'], [{ physicianId: null }, 'physicianId'],
    [{ cautions: { 'cardiac-device': 'no' } }, 'cautions.temporary-pacing-wire'], [{ cautions: { 'cardiac-device': 'not-asked', 'temporary-pacing-wire': 'no' } }, 'cautions.cardiac-device'],
  ] satisfies [Partial<DeskDraftValues>, string][])('%j: %s, and the draft stays', async (change, path) => {
    const draft = await begin(own, typed(change))
    expect(deskProblems(draft.values).map(error => error.path)).toEqual([path])
    const answer = await send(own, draft)
    expect([answer.status, answer.body.fields?.map(error => error.path)]).toEqual([422, expect.arrayContaining([path])])
    expect((await ask(own, 'DELETE', `/api/desk/drafts/${draft.id}`)).status).toBe(200)
  })
  it.each([
    ['a birth in the future', typed({ birthDate: '2027-01-01' })], ['a closed site', typed()], ['another physician', typed({ physicianId: other.physician.id })], ['a site that is none', typed({ siteId: 'none' })],
  ])('%s', async (name, values) => {
    const closed = name === 'a closed site' ? await t.makeSite({ closedAt: '2026-01-01T00:00:00.000Z' }) : undefined
    const before = await patientsNow()
    const draft = await begin(own, closed ? { ...values, siteId: closed.id } : values)
    expect((await send(own, draft)).status).toBe(422)
    expect(await patientsNow()).toBe(before)
    await ask(own, 'DELETE', `/api/desk/drafts/${draft.id}`)
  })
})

describe('a sent referral', () => {
  it('is received once, marked as from the desk, in the own list; the draft is gone', async () => {
    const draft = await begin(own)
    const [first, second] = await Promise.all([send(own, draft), send(own, draft)])
    expect([first.status, second.status].sort()).toEqual([200, 404])
    const { id } = first.status === 200 ? first.body : second.body
    const row = await t.db.selectFrom('referral').selectAll().where('id', '=', id).executeTakeFirstOrThrow()
    expect([row.state, row.physicianId, row.createdBy, row.receivedAt]).toEqual(['received', own.physician.id, own.user.id, t.context.clock().toISOString()])
    expect((await referralView(t.db, id, '2026-12-02'))!.desk).toMatchObject({ sentBy: 'Dr Own Sample', identifiedAt: null })
    expect((await t.db.selectFrom('auditEvent').select('name').where('subjectId', '=', id).orderBy('id').execute()).map(event => event.name)).toEqual(['referral.added', 'referral.sent-from-desk'])
    expect((await ask<DeskPage>(own, 'GET', '/api/desk/referrals')).body.rows.map(line => line.id)).toContain(id)
    expect((await ask<DeskPage>(other, 'GET', '/api/desk/referrals')).body.rows.map(line => line.id)).not.toContain(id)
  })
  it('answers alike whether the patient is known or not: nothing of the register is told', async () => {
    await t.makePatient({ familyName: 'Known', givenName: 'Iva', birthDate: '1950-02-03', phone: '555 9999' })
    const answers = [await sent(typed({ familyName: 'Known', givenName: 'Iva', birthDate: '1950-02-03' })), await sent(typed({ familyName: 'Unknown', givenName: 'Ida', birthDate: '1951-02-03' }))]
    expect(answers.map(answer => Object.keys(answer).sort())).toEqual([['id', 'number'], ['id', 'number']])
    expect(JSON.stringify((await ask<DeskPage>(own, 'GET', '/api/desk/referrals')).body)).not.toMatch(/555 9999|P-\d|PAT-/)
  })
})

describe('who the patient is', () => {
  it('is said before the referral is accepted: a record of the register, and the referral goes there', async () => {
    const known = await t.makePatient({ familyName: 'Twice', givenName: 'Ana', birthDate: '1960-01-05' })
    const { id } = await sent(typed({ familyName: 'Twice', givenName: 'Ana', birthDate: '1960-01-05' }))
    const view = (await referralView(t.db, id, '2026-12-02'))!
    expect(view.desk!.candidates.map(candidate => [candidate.patient.id, candidate.strength])).toEqual([[known.id, 'likely-same']])
    expect(nextStep({ state: 'received', missing: [], studyState: null, identify: view.desk!.identifiedAt === null })).toBe('Say who the patient is')
    await expect(acceptReferral(admin, { id, protocol: 'carpal-tunnel' })).rejects.toMatchObject({ options: { fields: [{ path: 'patientId' }] } })
    await expect(identifyPatient(admin, { referralId: id, knownId: known.id, reason: '' })).rejects.toMatchObject({ code: 'not-valid' })
    await identifyPatient(admin, { referralId: id, knownId: known.id, reason: 'Same address, asked by telephone' })
    expect(await t.db.selectFrom('referral').select('patientId').where('id', '=', id).executeTakeFirstOrThrow()).toEqual({ patientId: known.id })
    await acceptReferral(admin, { id, protocol: 'carpal-tunnel' })
    await expect(identifyPatient(admin, { referralId: id, knownId: null, reason: 'changed my mind' })).rejects.toMatchObject({ code: 'wrong-state' })
  })
  it('taken apart again, the question stands again', async () => {
    const known = await t.makePatient({ familyName: 'Apart', givenName: 'Ana', birthDate: '1961-01-05' })
    const { id } = await sent(typed({ familyName: 'Apart', givenName: 'Ana', birthDate: '1961-01-05' }))
    await identifyPatient(admin, { referralId: id, knownId: known.id, reason: 'Looked alike' })
    const merge = await t.db.selectFrom('patientMerge').select('id').where('keptId', '=', known.id).executeTakeFirstOrThrow()
    await undoMerge(admin, { mergeId: merge.id, reason: 'Two cousins' })
    const view = (await referralView(t.db, id, '2026-12-02'))!
    expect([view.patient.id === known.id, view.desk!.identifiedAt]).toEqual([false, null])
  })
  it('somebody new needs a reason only where a record is likely the same', async () => {
    const plain = await sent(typed({ familyName: 'Nobodyelse', givenName: 'Eva', birthDate: '1981-08-08' }))
    await identifyPatient(admin, { referralId: plain.id, knownId: null, reason: '' })
    await t.makePatient({ familyName: 'Likely', givenName: 'Eva', birthDate: '1982-08-08' })
    const alike = await sent(typed({ familyName: 'Likely', givenName: 'Eva', birthDate: '1982-08-08' }))
    await expect(identifyPatient(admin, { referralId: alike.id, knownId: null, reason: '' })).rejects.toMatchObject({ code: 'not-valid' })
    await identifyPatient(admin, { referralId: alike.id, knownId: null, reason: 'Another address and insurance number' })
    expect((await referralView(t.db, alike.id, '2026-12-02'))!.desk).toMatchObject({ outcome: 'new', candidates: [] })
  })
  it('another sex for limits is not put together, and nothing changes', async () => {
    const known = await t.makePatient({ familyName: 'Differs', givenName: 'Sam', birthDate: '1963-01-05', sexForLimits: 'male' })
    const { id } = await sent(typed({ familyName: 'Differs', givenName: 'Sam', birthDate: '1963-01-05', sexForLimits: 'female' }))
    await expect(identifyPatient(admin, { referralId: id, knownId: known.id, reason: 'Same address' })).rejects.toMatchObject({ code: 'not-valid' })
    expect((await referralView(t.db, id, '2026-12-02'))!.desk!.identifiedAt).toBeNull()
  })
})

describe('a return', () => {
  let id = ''
  beforeAll(async () => {
    id = (await sent(typed({ familyName: 'Returned' }))).id
    await returnReferral(admin, { id, reasons: ['side', 'other'], note: 'Which hand is worse?' })
  })
  it('shows what is asked and nothing else', async () => {
    const { status, body } = await ask<DeskRequest>(own, 'GET', `/api/desk/referrals/${id}/request`)
    expect([status, body.note, Object.keys(body.values).sort(), body.asked.words]).toEqual([200, 'Which hand is worse?', ['bodySite', 'side'], true])
    expect((await ask<DeskPage>(own, 'GET', '/api/desk/referrals')).body.rows.filter(row => row.answerable).map(row => row.id)).toEqual([id])
  })
  it('goes back by itself with the asked items only, though the link of the mail was locked by wrong birth dates', async () => {
    await t.db.updateTable('referrerLetter').set({ wrongBirths: 6 }).where('referralId', '=', id).execute()
    const path = `/api/desk/referrals/${id}/answer`
    expect((await ask(own, 'POST', path, { values: { side: 'left' }, words: '' })).status).toBe(422)
    expect((await ask(own, 'POST', path, { values: { side: 'left', symptoms: 'smuggled in' }, words: 'The left one' })).status).toBe(200)
    const row = await t.db.selectFrom('referral').selectAll().where('id', '=', id).executeTakeFirstOrThrow()
    expect([row.state, row.side, row.symptoms]).toEqual(['received', 'left', 'Numb at night'])
    const [letter] = (await referralView(t.db, id, '2026-12-02'))!.letters
    expect([letter!.answer!.words, letter!.answer!.changes.map(change => change.field), letter!.seenAt]).toEqual(['The left one', ['side'], null])
    expect((await t.db.selectFrom('auditEvent').select('actorId').where('name', '=', 'letter.answered').where('subjectId', '=', id).execute())).toEqual([{ actorId: own.user.id }])
    expect((await ask(own, 'POST', path, { values: { side: 'right' }, words: 'again' })).status).toBe(409)
  })
})

describe('every route of the desk', () => {
  const withId = routes.filter(route => route.path.startsWith('/api/desk') && route.path.includes(':'))
  let foreign: Record<string, string>
  beforeAll(async () => {
    const { id } = await sent(typed({ familyName: 'Foreign' }))
    await returnReferral(admin, { id, reasons: ['side'], note: '' })
    foreign = { drafts: (await begin(own, typed({ familyName: 'Foreign' }))).id, referrals: id, reports: id, deliveries: id }
  })
  it('there are some', () => expect(withId.length).toBeGreaterThanOrEqual(11))
  it.each(withId)('$method $path: what is somebody else\'s is not found, and stays as it is', async ({ method, path }) => {
    const kind = path.split('/')[3]!
    const state = async () => JSON.stringify([await t.db.selectFrom('deskDraft').selectAll().execute(), await t.db.selectFrom('referral').selectAll().execute(), await t.db.selectFrom('referrerLetter').selectAll().execute()])
    const before = await state()
    for (const id of [foreign[kind]!, 'none']) {
      const answer = await call(method.toUpperCase(), path.replace(/:\w+/, id), { cookie: other.cookie, body: method === 'get' ? undefined : { revision: 1, values: typed(), words: 'What is this about?' } })
      expect(answer.status).toBe(404)
    }
    expect(await state()).toBe(before)
  })
  it.each(['technologist', 'neurologist', 'administrator', 'medical-director'] as const)('a %s has no desk', async (role) => {
    const cookie = await cookieFor(t, await t.makeUser({ roles: [{ siteId: site.id, role }] }))
    for (const { method, path } of routes.filter(route => route.path.startsWith('/api/desk'))) expect((await call(method.toUpperCase(), path.replace(/:\w+/, 'none'), { cookie, body: method === 'get' ? undefined : {} })).status).toBe(403)
  })
  it('who left the practice begins nothing and sends nothing', async () => {
    const left = await makeReferrer('Dr Left Sample')
    const draft = await begin(left, typed({ physicianId: left.physician.id }))
    await t.db.updateTable('physician').set({ leftOn: '2026-12-01' }).where('id', '=', left.physician.id).execute()
    expect((await send(left, draft)).status).toBe(422)
    expect((await ask(left, 'POST', '/api/desk/drafts', typed())).status).toBe(403)
  })
})
