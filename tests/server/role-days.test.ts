import type { EventHandler } from 'h3'
import { describe, expect, it } from 'vitest'
import { changePerson, deactivatePerson } from '#server/services/change-person'
import { viewPerson } from '#server/services/people'
import { TEST_NOW, testContext } from './helpers'
import { cookieFor, serve } from './http'

/** Roles have a first and a last day; the server looks at each request. */
const t = await testContext()
const site = await t.makeSite()
const admin = await t.makeUser({ roles: ['administrator'] })
const { call } = serve(t, [{ method: 'get', path: '/api/patients', handler: (await import('../../server/api/patients/index.get')).default as EventHandler }])
const DAY = 24 * 60
const technologist = (days: { startsOn?: string, endsOn?: string | null } = {}) => [{ siteId: site.id, role: 'technologist' as const, ...days }]
/** A fresh session each time, since a day is longer than one lasts. */
const mayLook = async (user: Awaited<ReturnType<typeof t.makeUser>>) => (await call('GET', '/api/patients', { cookie: await cookieFor(t, user) })).status === 200

describe('a role with days', () => {
  it('counts from its first day to the day before its end, at each request', async () => {
    const user = await t.makeUser()
    await changePerson(t.as(admin), user.id, { holdings: technologist({ startsOn: '2026-12-03', endsOn: '2026-12-05' }) })
    const seen: boolean[] = []
    for (let day = 0; day < 4; day++) {
      seen.push(await mayLook(user))
      t.clock.minutes(DAY)
    }
    expect(seen).toEqual([false, true, true, false])
    t.clock.set(TEST_NOW)
    expect((await viewPerson(t.as(admin), [site.id], user.id)).holdings).toMatchObject([{ startsOn: '2026-12-03', endsOn: '2026-12-05', inForce: false }])
  })
  it('is lengthened, and the trail has both days', async () => {
    const user = await t.makeUser()
    await changePerson(t.as(admin), user.id, { holdings: technologist({ endsOn: '2026-12-05' }) })
    await changePerson(t.as(admin), user.id, { holdings: technologist({ endsOn: '2026-12-09' }) })
    await changePerson(t.as(admin), user.id, { holdings: technologist() })
    expect((await viewPerson(t.as(admin), [site.id], user.id)).holdings).toMatchObject([{ startsOn: '2026-12-02', endsOn: '2026-12-09', inForce: true }])
    const events = await t.db.selectFrom('auditEvent').select('dataJson').where('name', '=', 'role.dates-changed').where('subjectId', '=', user.id).execute()
    expect(events.map(event => JSON.parse(event.dataJson))).toEqual([{ role: 'technologist', changes: [{ field: 'endsOn', before: '2026-12-05', after: '2026-12-09' }] }])
  })
  it('that lies ahead is taken away before it ever counts', async () => {
    const user = await t.makeUser()
    await changePerson(t.as(admin), user.id, { holdings: technologist({ startsOn: '2026-12-10' }) })
    await changePerson(t.as(admin), user.id, { holdings: [] })
    t.clock.minutes(10 * DAY)
    expect(await mayLook(user)).toBe(false)
    t.clock.set(TEST_NOW)
  })
  it.each([
    ['begins before today', { startsOn: '2026-12-01' }], ['ends before it begins', { startsOn: '2026-12-05', endsOn: '2026-12-05' }], ['ended already', { endsOn: '2026-12-02' }],
  ])('is refused when it %s', async (_name, days) => {
    const user = await t.makeUser()
    await expect(changePerson(t.as(admin), user.id, { holdings: technologist(days) })).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ path: 'holdings' }] } })
  })
  it('the last administrator of a site gets no last day', async () => {
    const lone = await t.makeSite()
    const last = await t.makeUser({ roles: [{ siteId: lone.id, role: 'administrator' }] })
    await expect(changePerson(t.as(last), last.id, { holdings: [{ siteId: lone.id, role: 'administrator', endsOn: '2026-12-03' }] })).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ message: expect.stringContaining('would have no administrator left') }] } })
  })
})

it('whoever is deactivated while signed in is out at the next request, and links made before are worth nothing', async () => {
  const user = await t.makeUser({ roles: [{ siteId: site.id, role: 'technologist' }] })
  const cookie = await cookieFor(t, user)
  expect((await call('GET', '/api/patients', { cookie })).status).toBe(200)
  const { makeSetUpLink, setPassword } = await import('#server/services/set-up-link')
  const answer = await makeSetUpLink(t.as(admin), user.id, { resetSecondFactor: false })
  await deactivatePerson(t.as(admin), user.id)
  expect((await call('GET', '/api/patients', { cookie })).status).toBe(401)
  await expect(setPassword(t.context, { token: (answer as { link: string }).link.split('#')[1]!, password: 'seven green lanterns' })).rejects.toMatchObject({ code: 'link-used' })
})
