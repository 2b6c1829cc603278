import ICAL from 'ical.js'
import { simpleParser } from 'mailparser'
import { describe, expect, it } from 'vitest'
import { composeMail } from '#server/email/compose-mail'
import { renderMail } from '#server/email/templates/index'
import { bookReferral, noteNotAttended } from '#server/services/book-referral'
import { actOnReferrals } from '#server/services/bulk-referrals'
import { firstFree } from '#server/services/first-free'
import { cancelReferral, changeUrgency } from '#server/services/move-referral'
import { changePatient } from '#server/services/save-patient'
import { addClosedDay } from '#server/services/site-calendar'
import { listViews, removeListView, saveListView } from '#server/services/list-views'
import { viewReferral } from '#server/services/view-referral'
import { viewWeek } from '#server/services/view-week'
import { auditSentence } from '#shared/audit-events'
import type { NewPatient } from '#server/database/tables/patient'
import { clinic } from './bench-helpers'
import { testContext } from './helpers'

const t = await testContext()
const c = await clinic(t)
await t.makeHours(c.site.id)
const secret = { familyName: 'Oddname', givenName: 'Élise', birthDate: '1961-05-09' }
const willing = (changes: Partial<NewPatient> = {}) => t.makePatient({ ...secret, email: 'elise@home.example', mailConsent: 'yes', ...changes })

interface Sent { state: string, dueAt: string, toAddress: string, kind: string, data: unknown }
async function mailsOf(address = 'elise@home.example'): Promise<Sent[]> {
  const rows = await t.db.selectFrom('outboxMail').selectAll().where('template', '=', 'appointment').where('toAddress', '=', address).orderBy('createdAt').execute()
  return rows.map((row) => {
    const data = row.dataSealed ? JSON.parse(t.keys.unseal(row.dataSealed)) as { kind: string } : { kind: 'held back' }
    return { state: row.state, dueAt: row.dueAt, toAddress: row.toAddress, kind: data.kind, data }
  })
}
/** The message as it leaves, parsed as the patient's program would. */
async function received(mail: Sent) {
  const raw = await composeMail({ from: t.settings.mailFrom, to: mail.toAddress, messageId: '<a@b.example>', date: t.context.clock(), content: renderMail('appointment', mail.data, t.settings.appOrigin) })
  const parsed = await simpleParser(raw)
  const text = parsed.attachments.find(one => one.contentType.startsWith('text/calendar'))!.content.toString('utf8')
  const calendar = new ICAL.Component(ICAL.parse(text) as never)
  const event = new ICAL.Event(calendar.getFirstSubcomponent('vevent')!)
  return { raw: raw.toString('utf8'), subject: parsed.subject, text: parsed.text ?? '', ics: text, method: calendar.getFirstPropertyValue('method'), uid: event.uid, sequence: event.sequence, start: event.startDate.toJSDate().toISOString(), status: event.component.getFirstPropertyValue('status'), attendees: event.attendees.length }
}
const sendAll = () => t.db.updateTable('outboxMail').set({ state: 'sent' }).where('state', '=', 'queued').where('dueAt', '<=', t.context.clock().toISOString()).execute()
let hour = 8
const slot = (changes: object = {}) => ({ siteId: c.site.id, room: 'Room 1', technologistId: null, date: '2026-12-09', time: `${String(hour++).padStart(2, '0')}:00`, minutes: 60, ...changes })

describe('what a patient is told by mail', () => {
  it('a booking, its move and its end: one entry of the calendar with a growing sequence, and nothing of the patient in any of it', async () => {
    const id = await c.accepted({ patientId: (await willing()).id, clinicalQuestion: 'Secret question?' })
    await bookReferral(c.admin, { id, ...slot() })
    const [first, reminder] = await mailsOf()
    expect(first).toMatchObject({ kind: 'new', state: 'queued' })
    expect(reminder).toMatchObject({ kind: 'reminder', state: 'queued', dueAt: '2026-12-07T08:00:00.000Z' })
    await sendAll()
    await bookReferral(c.admin, { id, ...slot({ date: '2026-12-10', time: '09:30' }), reason: 'the patient asked' })
    const moved = (await mailsOf()).find(mail => mail.kind === 'moved')!
    expect((await mailsOf()).filter(mail => mail.kind === 'reminder').map(mail => mail.dueAt)).toEqual(['2026-12-08T08:00:00.000Z'])
    await sendAll()
    await cancelReferral(c.admin, { id, reason: 'no longer wanted' })
    const off = (await mailsOf()).find(mail => mail.kind === 'cancelled')!
    expect((await mailsOf()).filter(mail => mail.kind === 'reminder' && mail.state === 'queued')).toEqual([])
    const all = await Promise.all([first!, moved, off].map(received))
    expect(all.map(mail => [mail.method, mail.sequence, mail.start, mail.status])).toEqual([
      ['REQUEST', 0, '2026-12-09T07:00:00.000Z', 'CONFIRMED'], ['REQUEST', 1, '2026-12-10T08:30:00.000Z', 'CONFIRMED'], ['CANCEL', 2, '2026-12-10T08:30:00.000Z', 'CANCELLED']])
    expect(new Set(all.map(mail => mail.uid)).size).toBe(1)
    for (const mail of all) {
      expect(mail.attendees).toBe(0)
      for (const word of ['Oddname', 'lise', '1961', 'Secret', 'elise@home']) expect(mail.ics + mail.text + mail.subject!).not.toContain(word)
    }
    expect(all[0]!.text).toMatch(/Wednesday,? 9 December 2026, 08:00/)
    expect(all[0]!.text).toContain('warm hands and feet')
    expect(all[2]!.text).not.toContain('warm hands')
    const booked = await t.db.selectFrom('auditEvent').select('dataJson').where('name', '=', 'referral.booked').where('subjectId', '=', id).orderBy('seq').execute()
    expect(auditSentence('referral.booked', JSON.parse(booked[1]!.dataJson))).toBe('booked a referral for 10 December 2026, 09:30 (Europe/Prague), in place of an earlier booking')
    expect((await viewReferral(c.admin, id)).history.find(change => change.to === 'accepted' && change.from === 'booked')?.reason).toBe('booked for another time: the patient asked')
  })
  it.each([['has not agreed', { mailConsent: 'no' as const, email: 'silent@home.example' }], ['was not asked', { mailConsent: 'not-asked' as const, email: 'silent@home.example' }], ['has no address', { mailConsent: 'yes' as const, email: '' }]])('nothing when the patient %s', async (_, changes) => {
    const id = await c.accepted({ patientId: (await willing(changes)).id })
    await bookReferral(c.admin, { id, ...slot({ room: 'Room 2' }) })
    await noteNotAttended(c.admin, { id, reason: 'did not come' })
    expect(await mailsOf('silent@home.example')).toEqual([])
    expect(await t.db.selectFrom('appointment').selectAll().where('referralId', '=', id).execute()).toEqual([])
  })
  it('not attended and booked again: no mail about the missed one, the same entry for the new one', async () => {
    const id = await c.accepted({ patientId: (await willing({ email: 'again@home.example' })).id })
    await bookReferral(c.admin, { id, ...slot({ date: '2026-12-11', time: '08:00' }) })
    await sendAll()
    t.clock.set('2026-12-11T12:00:00.000Z')
    await noteNotAttended(c.admin, { id, reason: 'did not come' })
    expect((await mailsOf('again@home.example')).map(mail => mail.kind)).toEqual(['new', 'held back'])
    await bookReferral(c.admin, { id, ...slot({ date: '2026-12-21', time: '08:00' }) })
    const mails = await Promise.all((await mailsOf('again@home.example')).filter(mail => mail.kind === 'new').map(received))
    expect(mails.map(mail => mail.sequence)).toEqual([0, 1])
    expect(mails[0]!.uid).toBe(mails[1]!.uid)
    t.clock.set('2026-12-02T09:00:00.000Z')
  })
  it('consent that comes later confirms what is booked; consent taken back ends the reminder', async () => {
    const patient = await willing({ email: 'later@home.example', mailConsent: 'not-asked' })
    const id = await c.accepted({ patientId: patient.id })
    await bookReferral(c.admin, { id, ...slot({ date: '2026-12-14', time: '08:00' }) })
    const agreed = await changePatient(c.admin, { id: patient.id, revision: 1, mailConsent: 'yes' })
    expect((await mailsOf('later@home.example')).map(mail => [mail.kind, mail.state])).toEqual([['new', 'queued'], ['reminder', 'queued']])
    await changePatient(c.admin, { id: patient.id, revision: agreed.revision, mailConsent: 'no' })
    expect((await mailsOf('later@home.example')).filter(mail => mail.state === 'queued')).toEqual([])
  })
  it('a booking that moves before its mail left: one mail with where it stands, still the first of its entry', async () => {
    const id = await c.accepted({ patientId: (await willing({ email: 'quick@home.example' })).id })
    await bookReferral(c.admin, { id, ...slot({ date: '2026-12-15', time: '08:00' }) })
    await bookReferral(c.admin, { id, ...slot({ date: '2026-12-15', time: '09:00' }) })
    const waiting = (await mailsOf('quick@home.example')).filter(mail => mail.state === 'queued' && mail.kind !== 'reminder')
    expect(await Promise.all(waiting.map(received))).toMatchObject([{ sequence: 0, start: '2026-12-15T08:00:00.000Z' }])
  })
  it.each([['de', 'Ihr Termin', 'warmen Händen'], ['fr', 'Votre rendez-vous', 'mains et les pieds chauds'], ['es', 'Su cita', 'manos y los pies calientes'], ['xx', 'Your appointment', 'warm hands']])('in %s', async (language, subject, words) => {
    const [mail] = await mailsOf('quick@home.example').then(list => list.filter(one => one.kind === 'new'))
    const told = await received({ ...mail!, data: { ...mail!.data as object, language } })
    expect([told.subject, told.text]).toEqual([subject, expect.stringContaining(words)])
  })
})

describe('working hours, closed days and free times', () => {
  const refused = (path: string, message: RegExp) => ({ code: 'not-valid', options: { fields: [{ path, message: expect.stringMatching(message) as string }] } })
  it.each([
    ['before it opens', { time: '07:30' }, 'time', /08:00 to 17:00/], ['past the end', { time: '16:30' }, 'time', /08:00 to 17:00/], ['a Saturday', { date: '2026-12-12', time: '10:00' }, 'date', /weekday/],
  ])('a booking %s is refused, and done on purpose it is not', async (_, changes, path, message) => {
    const id = await c.accepted()
    const wish = { id, ...slot({ date: '2026-12-16', room: 'Room 2', ...changes }) }
    await expect(bookReferral(c.admin, wish)).rejects.toMatchObject(refused(path, message))
    await expect(bookReferral(c.admin, { ...wish, outsideHours: true })).resolves.toBeTruthy()
  })
  it('a closed day is refused with its reason', async () => {
    await addClosedDay(c.admin, c.site.id, { day: '2026-12-17', reason: 'public holiday' })
    await expect(bookReferral(c.admin, { id: await c.accepted(), ...slot({ date: '2026-12-17', time: '10:00' }) })).rejects.toMatchObject(refused('date', /public holiday/))
  })
  it('a technologist who is away cannot be booked', async () => {
    const [away, cover] = [await t.makeUser({ roles: [{ siteId: c.site.id, role: 'technologist' }] }), await t.makeUser({ roles: [{ siteId: c.site.id, role: 'technologist' }] })]
    await t.db.insertInto('absence').values({ id: 'away', userId: away.id, fromDay: '2026-12-16', toDay: '2026-12-16', coveredBy: cover.id, createdAt: '2026-12-01T08:00:00.000Z', createdBy: away.id }).execute()
    await expect(bookReferral(c.admin, { id: await c.accepted(), ...slot({ date: '2026-12-16', time: '13:00', room: 'Room 2', technologistId: away.id }) })).rejects.toMatchObject(refused('technologistId', /away/))
    expect((await viewWeek(c.admin, { siteId: c.site.id, day: '2026-12-16' })).technologists.find(person => person.id === away.id)?.days).not.toContain('2026-12-16')
  })
  it('the first free time is found by urgency, steps over closed days and what is taken, and says when it is late', async () => {
    const routine = await c.accepted()
    const found = await firstFree(c.admin, { referralId: routine, siteId: c.site.id, minutes: 60 })
    expect(found[0]).toMatchObject({ date: '2026-12-07', time: '08:00', room: 'Room 1', leadDays: 5, late: false })
    await changeUrgency(c.neurologist, { id: routine, urgency: 'same-week', reason: 'rapid weakness' })
    expect((await firstFree(c.admin, { referralId: routine, siteId: c.site.id, minutes: 60 }))[0]).toMatchObject({ date: '2026-12-02', time: '10:15' })
    expect((await firstFree(c.admin, { referralId: routine, siteId: c.site.id, minutes: 60, from: '2026-12-17' })).map(one => [one.date, one.late])).toEqual([['2026-12-18', true], ['2026-12-21', true], ['2026-12-22', true]])
    await bookReferral(c.admin, { id: await c.accepted(), ...slot({ date: '2026-12-18', time: '08:00', room: 'Room 1' }) })
    await bookReferral(c.admin, { id: await c.accepted(), ...slot({ date: '2026-12-18', time: '08:30', room: 'Room 2' }) })
    expect((await firstFree(c.admin, { referralId: routine, siteId: c.site.id, minutes: 60, from: '2026-12-18' }))[0]).toMatchObject({ time: '09:00', room: 'Room 1' })
  })
  it('a technologist booked at another site is not free here', async () => {
    const other = await clinic(t)
    await t.db.deleteFrom('absence').execute()
    const lone = await t.makeUser({ roles: [{ siteId: other.site.id, role: 'technologist' }, { siteId: c.site.id, role: 'technologist' }] })
    await t.db.updateTable('user').set({ deactivatedAt: '2026-12-01T00:00:00.000Z' }).where('id', '<>', lone.id).where('id', 'in', t.db.selectFrom('roleHolding').select('userId').where('siteId', '=', other.site.id).where('role', 'in', ['technologist', 'neurologist'])).execute()
    await bookReferral(c.admin, { id: await c.accepted(), ...slot({ date: '2027-01-04', time: '08:00', technologistId: lone.id }) })
    const found = await firstFree(other.admin, { referralId: await other.accepted(), siteId: other.site.id, minutes: 60, from: '2027-01-04' })
    expect(found[0]).toMatchObject({ date: '2027-01-04', time: '09:00', technologistId: lone.id })
  })
  it('the week has hours, closed days, bookings on the wall clock, and who waits, the most urgent first', async () => {
    const week = await viewWeek(c.admin, { siteId: c.site.id, day: '2026-12-16' })
    expect(week).toMatchObject({ from: '2026-12-14', today: '2026-12-02', rooms: ['Room 1', 'Room 2'] })
    expect(week.days[3]).toMatchObject({ closedBecause: 'public holiday', spans: [] })
    expect(week.days[5]!.spans).toEqual([])
    expect(week.bookings.find(booking => booking.day === '2026-12-15')).toMatchObject({ startTime: '09:00', minutes: 60, room: 'Room 1', state: 'booked' })
    expect(week.waiting[0]!.urgency).toBe('same-week')
  })
})

describe('triage', () => {
  it('changes the urgency with a reason, in the trail', async () => {
    const id = await c.draft()
    await expect(changeUrgency(c.neurologist, { id, urgency: 'urgent', reason: 'weakness' })).rejects.toMatchObject({ code: 'wrong-state' })
    const accepted = await c.accepted()
    await changeUrgency(c.neurologist, { id: accepted, urgency: 'urgent', reason: 'rapid weakness' })
    expect(await viewReferral(c.admin, accepted)).toMatchObject({ urgency: 'urgent', urgencyReason: 'rapid weakness' })
    await expect(changeUrgency(c.neurologist, { id: accepted, urgency: 'urgent', reason: 'again' })).rejects.toMatchObject({ code: 'not-valid' })
  })
})

describe('several referrals at once', () => {
  const received = async (changes: object = {}) => {
    const { receiveReferral } = await import('#server/services/move-referral')
    const id = await c.draft(changes)
    await receiveReferral(c.admin, { id })
    return id
  }
  it('previews, then does each by itself; what cannot be done keeps nothing back', async () => {
    const [good, incomplete, booked, elsewhere] = [await received(), await received({ examination: '' }), await c.accepted(), (await t.makeReferral()).id]
    const input = { act: 'accept' as const, ids: [good, incomplete, booked, elsewhere], protocol: 'carpal-tunnel', ownerId: null }
    const preview = await actOnReferrals(c.neurologist, { ...input, preview: true })
    expect(preview.map(item => item.ok)).toEqual([true, false, false, false])
    expect(preview[1]!.sentence).toBe('Complete the examination first.')
    expect(preview[3]).toEqual({ id: elsewhere, number: '', who: '', ok: false, sentence: 'Not found, or at a site where you have no role.' })
    expect((await viewReferral(c.admin, good)).state).toBe('received')
    expect((await actOnReferrals(c.neurologist, { ...input, preview: false })).map(item => item.ok)).toEqual([true, false, false, false])
    expect((await viewReferral(c.admin, good)).state).toBe('accepted')
    expect((await viewReferral(c.admin, incomplete)).state).toBe('received')
  })
  it('gives referrals to a person who works there, and to nobody else', async () => {
    const id = await received()
    const owner = c.neurologist.actor.userId!
    expect(await actOnReferrals(c.admin, { act: 'reassign', ids: [id], protocol: '', ownerId: owner, preview: false })).toMatchObject([{ ok: true }])
    expect(await viewReferral(c.admin, id)).toMatchObject({ owner: { id: owner } })
    expect(await actOnReferrals(c.admin, { act: 'reassign', ids: [id], protocol: '', ownerId: (await t.makeUser()).id, preview: false })).toMatchObject([{ ok: false }])
    expect(await actOnReferrals(c.technologist, { act: 'reassign', ids: [id], protocol: '', ownerId: null, preview: false })).toMatchObject([{ ok: false, sentence: 'Your role at this site does not allow it.' }])
  })
  it('reminds the patient of a booking, and says why not', async () => {
    const [willingOne, silent] = [await c.accepted({ patientId: (await willing({ email: 'bulk@home.example' })).id }), await c.accepted()]
    await bookReferral(c.admin, { id: willingOne, ...slot({ date: '2027-01-11', time: '08:00' }) })
    await bookReferral(c.admin, { id: silent, ...slot({ date: '2027-01-11', time: '09:00' }) })
    expect(await actOnReferrals(c.admin, { act: 'remind', ids: [willingOne, silent], protocol: '', ownerId: null, preview: false })).toMatchObject([{ ok: true }, { ok: false, sentence: 'The patient has no e-mail address here; telephone.' }])
    expect((await mailsOf('bulk@home.example')).map(mail => mail.kind)).toEqual(['new', 'reminder', 'reminder'])
  })
})

describe('saved views', () => {
  it('are one\'s own; the same name replaces', async () => {
    await saveListView(c.admin, { room: 'intake', name: 'Late', query: 'overdue=1' })
    expect(await saveListView(c.admin, { room: 'intake', name: 'late', query: 'overdue=1&urgency=urgent' })).toMatchObject([{ name: 'Late', query: 'overdue=1&urgency=urgent' }])
    const [view] = await listViews(c.admin, 'intake')
    expect(await listViews(c.neurologist, 'intake')).toEqual([])
    await expect(removeListView(c.neurologist, view!.id)).rejects.toMatchObject({ code: 'not-found' })
    await removeListView(c.admin, view!.id)
    expect(await listViews(c.admin, 'intake')).toEqual([])
  })
})
