import { describe, expect, it } from 'vitest'
import { routeOf } from '#server/database/queries/bands'
import { bookReferral, noteNotAttended } from '#server/services/book-referral'
import { freeTimes } from '#server/services/free-times'
import { acceptReferral, cancelReferral, declineReferral, receiveReferral, returnReferral } from '#server/services/move-referral'
import { addReferral, changeReferral } from '#server/services/save-referral'
import { viewReferral } from '#server/services/view-referral'
import { nextStep } from '#shared/next-step'
import { clinic, eventNames } from './bench-helpers'
import { testContext } from './helpers'

const t = await testContext()
const c = await clinic(t)
const view = (id: string) => viewReferral(c.admin, id)
const bookingsOf = (id: string) => t.db.selectFrom('booking').select(['state', 'reason', 'startsAt', 'endsAt']).where('referralId', '=', id).orderBy('createdAt').orderBy('startsAt').execute()

describe('a draft', () => {
  it('is saved incomplete, says what is missing, and cannot be accepted before it is complete', async () => {
    const input = await c.complete({ clinicalQuestion: '', side: null, physicianId: null, symptoms: '', examination: '', urgency: 'urgent', cautions: {} })
    const { id } = await addReferral(c.admin, input)
    const missing = ['clinicalQuestion', 'side', 'physicianId', 'symptoms', 'examination', 'urgencyReason', 'cautions.cardiac-device', 'cautions.temporary-pacing-wire']
    expect((await view(id)).missing.map(item => item.path)).toEqual(missing)
    await receiveReferral(c.admin, { id })
    await expect(acceptReferral(c.neurologist, { id, protocol: 'carpal-tunnel' })).rejects.toMatchObject({ code: 'not-valid' })
    expect(await view(id)).toMatchObject({ state: 'received', number: 'REF-2026-000001', protocol: null })
  })
  it.each([
    { what: 'a patient who is not in the register', change: { patientId: 'nobody' }, path: 'patientId' },
    { what: 'a physician who is not in the directory', change: { physicianId: 'nobody' }, path: 'physicianId' },
    { what: 'a copy to nobody', change: { copyPhysicianIds: ['nobody'] }, path: 'copyPhysicianIds' },
    { what: 'a site that does not exist', change: { siteId: 'nowhere' }, path: 'siteId' },
  ])('is refused with $what', async ({ change, path }) => {
    const input = await c.complete()
    await expect(addReferral(c.admin, { ...input, ...change })).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ path }] } })
  })
  it('keeps copies once each and never to the referring physician', async () => {
    const [copy, input] = [await t.makePhysician(), await c.complete()]
    const { id } = await addReferral(c.admin, { ...input, copyPhysicianIds: [copy.id, copy.id, input.physicianId!] })
    expect((await view(id)).copyPhysicianIds).toEqual([copy.id])
  })
})

describe('changing a referral', () => {
  it('keeps the earlier text in the trail and raises the revision', async () => {
    const id = await c.draft({ symptoms: 'Before' })
    await changeReferral(c.admin, { id, revision: 1, input: { ...await view(id), symptoms: 'After' } })
    expect(await view(id)).toMatchObject({ symptoms: 'After', revision: 2 })
    const event = await t.db.selectFrom('auditEvent').select('dataJson').where('subjectId', '=', id).where('name', '=', 'referral.changed').executeTakeFirstOrThrow()
    expect(JSON.parse(event.dataJson)).toMatchObject({ changes: [{ field: 'symptoms', before: 'Before' }] })
  })
  it('refuses an old revision and shows what stands', async () => {
    const id = await c.draft()
    const form = await view(id)
    await changeReferral(c.admin, { id, revision: 1, input: { ...form, onset: 'May' } })
    await expect(changeReferral(c.admin, { id, revision: 1, input: { ...form, onset: 'June' } })).rejects.toMatchObject({ code: 'changed-meanwhile', options: { details: { theirs: { onset: 'May', revision: 2 } } } })
  })
  it('may not make an accepted referral incomplete, nor move a booked one, nor change its patient', async () => {
    const id = await c.booked()
    const form = await view(id)
    const change = (input: object) => changeReferral(c.admin, { id, revision: form.revision, input: { ...form, ...input } })
    await expect(change({ side: null })).rejects.toMatchObject({ options: { fields: [{ path: 'side' }] } })
    const other = await t.makePatient()
    await expect(change({ patientId: other.id })).rejects.toMatchObject({ options: { fields: [{ path: 'patientId' }] } })
    const elsewhere = await t.makeSite()
    await expect(change({ siteId: elsewhere.id })).rejects.toMatchObject({ code: 'not-allowed' })
  })
  it('is over once it is declined', async () => {
    const id = await c.draft()
    await declineReferral(c.neurologist, { id, reason: 'not our work' })
    const form = await view(id)
    await expect(changeReferral(c.admin, { id, revision: form.revision, input: form })).rejects.toMatchObject({ code: 'wrong-state' })
  })
})

describe('the way of a referral', () => {
  it('draft, received, returned, received, accepted, booked, did not attend, booked, with everything in history and trail', async () => {
    const id = await c.draft()
    await receiveReferral(c.admin, { id })
    await returnReferral(c.neurologist, { id, reasons: ['other'], note: 'Which hand?' })
    await receiveReferral(c.admin, { id })
    await acceptReferral(c.neurologist, { id, protocol: 'carpal-tunnel', urgency: 'routine' })
    await bookReferral(c.admin, { id, ...c.slot({ time: '08:00' }) })
    await noteNotAttended(c.technologist, { id, reason: 'did not come' })
    await bookReferral(c.admin, { id, ...c.slot({ time: '08:30' }) })
    const seen = await view(id)
    expect(seen.history.map(change => change.to)).toEqual(['draft', 'received', 'returned', 'received', 'accepted', 'booked', 'did-not-attend', 'booked'])
    expect(await eventNames(t, id)).toEqual(['referral.added', 'referral.received', 'referral.returned', 'letter.mailed', 'referral.received', 'referral.accepted', 'referral.booked', 'referral.not-attended', 'referral.booked'])
    expect(seen.route[0]).toMatchObject({ id: 'intake', state: 'here', words: 'booked', wentBack: [{ reason: 'Which hand?' }, { reason: 'did not come' }] })
    expect(seen.route.slice(1).map(node => node.state)).toEqual(['ahead', 'ahead', 'ahead'])
  })
  it.each([
    ['accept a draft', (id: string) => acceptReferral(c.neurologist, { id, protocol: 'carpal-tunnel' })],
    ['book a draft', (id: string) => bookReferral(c.admin, { id, ...c.slot() })],
    ['return a draft', (id: string) => returnReferral(c.neurologist, { id, reasons: ['side'], note: '' })],
    ['miss an appointment nobody made', (id: string) => noteNotAttended(c.admin, { id, reason: 'why' })],
  ])('does not let anyone %s, and writes nothing', async (_what, step) => {
    const id = await c.draft()
    await expect(step(id)).rejects.toMatchObject({ code: 'wrong-state' })
    expect((await view(id)).history).toHaveLength(1)
    expect(await eventNames(t, id)).toEqual(['referral.added'])
  })
  it('refuses an unknown protocol', async () => {
    await expect(acceptReferral(c.neurologist, { id: await c.draft(), protocol: 'no-such' })).rejects.toMatchObject({ code: 'not-valid' })
  })
  it('cancelling frees the room', async () => {
    const id = await c.accepted()
    await bookReferral(c.admin, { id, ...c.slot({ time: '20:00' }) })
    await cancelReferral(c.admin, { id, reason: 'patient recovered' })
    const next = await c.accepted()
    await bookReferral(c.admin, { id: next, ...c.slot({ time: '20:00' }) })
    expect(await bookingsOf(id)).toMatchObject([{ state: 'cancelled', reason: 'patient recovered' }])
  })
})

describe('booking', () => {
  it.each([
    { date: '2026-12-10', time: '09:00', utc: '2026-12-10T08:00:00.000Z' },
    { date: '2027-07-01', time: '09:00', utc: '2027-07-01T07:00:00.000Z' },
    { date: '2027-10-31', time: '02:30', utc: '2027-10-31T00:30:00.000Z' },
  ])('$date $time in Prague is $utc', async ({ date, time, utc }) => {
    const id = await c.accepted()
    await bookReferral(c.admin, { id, ...c.slot({ date, time, minutes: 45 }) })
    expect(await bookingsOf(id)).toEqual([{ state: 'booked', reason: '', startsAt: utc, endsAt: new Date(Date.parse(utc) + 45 * 60_000).toISOString() }])
  })
  it.each([
    { what: 'a room the site does not have', change: { room: 'Cellar' }, path: 'room' },
    { what: 'a technologist who does not work there', change: { technologistId: 'stranger' }, path: 'technologistId' },
    { what: 'yesterday', change: { date: '2026-12-01' }, path: 'date' },
    { what: 'an hour the clocks jump over', change: { date: '2027-03-28', time: '02:30' }, path: 'time' },
  ])('refuses $what', async ({ change, path }) => {
    const id = await c.accepted()
    await expect(bookReferral(c.admin, { id, ...c.slot(change) })).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ path }] } })
  })
  it('refuses a taken room, and a technologist taken in another room, but not the minute after', async () => {
    const [first, second] = [await c.accepted(), await c.accepted()]
    const technologistId = c.technologistUser.id
    await bookReferral(c.admin, { id: first, ...c.slot({ date: '2027-01-11', time: '09:00', technologistId }) })
    const book = (change: object) => bookReferral(c.admin, { id: second, ...c.slot({ date: '2027-01-11', time: '09:59', ...change }) })
    await expect(book({})).rejects.toMatchObject({ code: 'double-booking' })
    await expect(book({ room: 'Room 2', technologistId })).rejects.toMatchObject({ code: 'double-booking' })
    expect((await view(second)).state).toBe('accepted')
    await book({ time: '10:00', technologistId })
    expect((await view(second)).state).toBe('booked')
  })
  it('refuses a technologist who is taken at another site', async () => {
    const elsewhere = await t.makeSite()
    const both = await t.makeUser({ roles: ['technologist'] })
    const everywhere = t.as(await t.makeUser({ roles: ['administrator'] }))
    const [first, second] = [await c.accepted(), await c.accepted()]
    const when = { date: '2027-01-12', time: '09:00', technologistId: both.id }
    await bookReferral(everywhere, { id: first, ...c.slot(when) })
    await expect(bookReferral(everywhere, { id: second, ...c.slot(when), siteId: elsewhere.id })).rejects.toMatchObject({ code: 'double-booking' })
  })
  it('booked again, the first booking stands cancelled and the room is free', async () => {
    const id = await c.accepted()
    await bookReferral(c.admin, { id, ...c.slot({ date: '2027-02-01' }) })
    await bookReferral(c.admin, { id, ...c.slot({ date: '2027-02-02' }) })
    expect(await bookingsOf(id)).toMatchObject([{ state: 'cancelled' }, { state: 'booked' }])
    expect((await view(id)).history.slice(-3).map(change => change.to)).toEqual(['booked', 'accepted', 'booked'])
  })
  it('booked at another site, the referral moves there; without the right there it does not', async () => {
    const elsewhere = await t.makeSite()
    const id = await c.accepted()
    await expect(bookReferral(c.admin, { id, ...c.slot({ siteId: elsewhere.id }) })).rejects.toMatchObject({ code: 'not-allowed' })
    const everywhere = t.as(await t.makeUser({ roles: ['administrator'] }))
    await bookReferral(everywhere, { id, ...c.slot({ siteId: elsewhere.id }) })
    expect((await view(id)).siteId).toBe(elsewhere.id)
  })
  it('shows what is free and taken in the time of the site', async () => {
    const id = await c.accepted()
    await bookReferral(c.admin, { id, ...c.slot({ date: '2027-03-01', time: '11:15', minutes: 30, technologistId: c.technologistUser.id }) })
    const free = await freeTimes(c.admin, { siteId: c.site.id, date: '2027-03-01' })
    expect(free).toMatchObject({ timeZone: 'Europe/Prague', rooms: ['Room 1', 'Room 2'], taken: [{ room: 'Room 1', technologistId: c.technologistUser.id, startTime: '11:15', endTime: '11:45' }] })
    expect(free.technologists.map(person => person.name)).toContain(c.technologistUser.name)
    expect(await freeTimes(c.admin, { siteId: c.site.id, date: '2027-03-02' })).toMatchObject({ taken: [] })
  })
})

describe('band and route', () => {
  it('shows age, cautions and namesakes', async () => {
    const patient = await t.makePatient({ familyName: 'Two', givenName: 'Alike', birthDate: '2000-12-03' })
    await t.makePatient({ familyName: 'TWO', givenName: 'alike', birthDate: '1980-01-01' })
    const id = await c.draft({ patientId: patient.id, cautions: { 'cardiac-device': 'yes', 'temporary-pacing-wire': 'no' } })
    expect((await view(id)).band).toMatchObject({ familyName: 'Two', ageYears: 25, cautions: ['cardiac device'], cautionsAsked: false, namesakes: 1, side: 'right', heightCm: null })
  })
  it('is empty for a referral that does not exist', async () => expect(await routeOf(t.db, 'none')).toEqual([]))
})

describe('next step', () => {
  it.each([
    { state: 'draft', missing: [], studyState: null, says: 'Receive' },
    { state: 'draft', missing: [{ path: 'examination' }], studyState: null, says: 'Complete the examination' },
    { state: 'draft', missing: [{ path: 'side' }, { path: 'cautions.x' }, { path: 'cautions.y' }], studyState: null, says: 'Complete the side and the cautions' },
    { state: 'received', missing: [{ path: 'side' }, { path: 'symptoms' }, { path: 'examination' }], studyState: null, says: 'Complete the side and 2 more' },
    { state: 'received', missing: [], studyState: null, says: 'Accept or decline' },
    { state: 'accepted', missing: [], studyState: null, says: 'Book' },
    { state: 'attended', missing: [], studyState: 'handed-over', says: 'Read and sign' },
    { state: 'attended', missing: [], studyState: 'returned', says: 'Answer the reader\'s question' },
    { state: 'answered', missing: [], studyState: 'read', says: '' },
  ] as const)('$state, $studyState: "$says"', ({ says, ...referral }) => expect(nextStep(referral)).toBe(says))
})
