import { beforeAll, describe, expect, it } from 'vitest'
import { siteCalendar } from '#server/database/queries/site-calendar'
import { listSites } from '#server/services/view-sites'
import { bookReferral } from '#server/services/book-referral'
import { addSite, changeSite } from '#server/services/change-site'
import { addClosedDay, changeHours, changeRooms, removeClosedDay } from '#server/services/site-calendar'
import { siteHoursSchema } from '#shared/schemas/site-calendar'
import { testContext, type MadeUser } from './helpers'

const t = await testContext()
let admin: MadeUser
let siteId: string
beforeAll(async () => {
  const first = await t.makeSite()
  admin = await t.makeUser({ roles: ['administrator'] })
  siteId = (await addSite(t.as(admin), { name: 'New Site', town: 'Town', address: '', phone: '', timeZone: 'Europe/Prague', rooms: ['Blue', 'Green'] })).id
  expect(first.id).not.toBe(siteId)
})
const calendar = () => siteCalendar(t.db, siteId)
const roomOf = async (name: string) => (await calendar()).rooms.find(room => room.name === name)!

describe('the calendar of a site', () => {
  it('begins with its rooms and the usual week', async () => {
    const { rooms, hours, closedDays } = await calendar()
    expect(rooms.map(room => room.name)).toEqual(['Blue', 'Green'])
    expect(hours.map(span => [span.weekday, span.opensAt, span.closesAt])).toEqual([1, 2, 3, 4, 5].map(day => [day, '08:00', '17:00']))
    expect(closedDays).toEqual([])
  })
  it('renames, orders, adds and closes rooms, and opens a closed one again', async () => {
    const [blue, green] = [await roomOf('Blue'), await roomOf('Green')]
    await changeRooms(t.as(admin), siteId, [{ id: green.id, name: 'Green', note: 'wide door' }, { name: 'Red', note: '' }])
    expect((await calendar()).rooms.map(room => [room.name, room.note, room.closed])).toEqual([['Green', 'wide door', false], ['Red', '', false], ['Blue', '', true]])
    await changeRooms(t.as(admin), siteId, [{ id: blue.id, name: 'Azure', note: '' }, { id: green.id, name: 'Green', note: '' }])
    expect((await listSites(t.context, [siteId]))[0]?.rooms).toEqual(['Azure', 'Green'])
  })
  it('keeps the notes when the form of the site sends names alone', async () => {
    await changeRooms(t.as(admin), siteId, [{ name: 'Azure', note: 'ground floor' }, { name: 'Green', note: '' }])
    await changeSite(t.as(admin), siteId, { rooms: ['Green', 'Azure'] })
    expect((await calendar()).rooms.filter(room => !room.closed).map(room => [room.name, room.note])).toEqual([['Green', ''], ['Azure', 'ground floor']])
  })
  it('refuses two rooms of one name', async () => {
    await expect(changeRooms(t.as(admin), siteId, [{ name: 'One', note: '' }, { name: 'one', note: '' }])).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ path: 'rooms[1].name' }] } })
  })
  it('refuses to close or rename a room with bookings ahead', async () => {
    const referral = await t.makeReferral({ siteId, createdBy: admin.id, state: 'accepted' })
    await t.db.insertInto('roleHolding').values({ id: 'holding', userId: admin.id, siteId, role: 'administrator', startsOn: '2020-01-01', endsOn: null, grantedBy: null, createdAt: '2026-01-01' }).execute()
    const booker = { ...admin, holdings: [...admin.holdings, { siteId, role: 'administrator' as const }] }
    await bookReferral(t.as(booker), { id: referral.id, siteId, room: 'Azure', technologistId: null, date: '2026-12-03', time: '10:00', minutes: 60 })
    await expect(changeRooms(t.as(admin), siteId, [{ name: 'Green', note: '' }])).rejects.toMatchObject({ options: { fields: [{ message: 'Azure has bookings ahead. Move them first.' }] } })
    await expect(changeRooms(t.as(admin), siteId, [{ id: (await roomOf('Azure')).id, name: 'Lilac', note: '' }, { name: 'Green', note: '' }])).rejects.toMatchObject({ code: 'not-valid' })
    expect((await roomOf('Azure')).closed).toBe(false)
  })
  it('replaces the hours of the week, with a break', async () => {
    await changeHours(t.as(admin), siteId, [{ weekday: 1, opensAt: '08:00', closesAt: '12:00' }, { weekday: 1, opensAt: '13:00', closesAt: '16:30' }])
    expect((await calendar()).hours).toHaveLength(2)
  })
  it.each([
    ['an end before its beginning', [{ weekday: 1, opensAt: '12:00', closesAt: '08:00' }]],
    ['an overlap', [{ weekday: 2, opensAt: '08:00', closesAt: '12:00' }, { weekday: 2, opensAt: '11:00', closesAt: '15:00' }]],
    ['an hour that no clock shows', [{ weekday: 2, opensAt: '08:00', closesAt: '25:00' }]],
  ])('refuses %s', (_, hours) => expect(siteHoursSchema.safeParse({ hours }).success).toBe(false))
  it('closes a day, changes the reason, and opens it again', async () => {
    await addClosedDay(t.as(admin), siteId, { day: '2026-12-24', reason: 'holiday' })
    await addClosedDay(t.as(admin), siteId, { day: '2026-12-24', reason: 'public holiday' })
    expect((await calendar()).closedDays).toEqual([{ day: '2026-12-24', reason: 'public holiday' }])
    await removeClosedDay(t.as(admin), siteId, '2026-12-24')
    await expect(removeClosedDay(t.as(admin), siteId, '2026-12-24')).rejects.toMatchObject({ code: 'not-found' })
    await expect(addClosedDay(t.as(admin), siteId, { day: '2026-12-01', reason: 'past' })).rejects.toMatchObject({ code: 'not-valid' })
  })
})
