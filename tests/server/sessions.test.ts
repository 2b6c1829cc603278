import { beforeEach, describe, expect, it } from 'vitest'
import me from '../../server/api/me.get'
import everywhere from '../../server/api/profile/sign-out-everywhere.post'
import listOwn from '../../server/api/profile/sessions/index.get'
import endOne from '../../server/api/profile/sessions/[id].delete'
import { changePerson, deactivatePerson } from '#server/services/change-person'
import { defineApiHandler } from '#server/utils/api-handler'
import { TEST_NOW, testContext } from './helpers'
import { cookieFor, serve } from './http'

const t = await testContext({ idleMinutes: 20 })
const site = await t.makeSite()
const { call } = serve(t, [
  { method: 'get', path: '/api/me', handler: me },
  { method: 'post', path: '/api/profile/sign-out-everywhere', handler: everywhere },
  { method: 'get', path: '/api/profile/sessions', handler: listOwn },
  { method: 'delete', path: '/api/profile/sessions/:id', handler: endOne },
  { method: 'get', path: '/api/signing', handler: defineApiHandler({ allow: 'report.sign', handle: () => ({ done: true }) }) },
  { method: 'get', path: '/api/fails', handler: defineApiHandler({ allow: 'signed-in', handle: () => { throw new Error('select * from patient where family_name = \'Invented\'') } }) },
])
const admin = await t.makeUser({ roles: ['administrator'] })
const isIn = async (cookie: string, headers = {}) => (await call('GET', '/api/profile/sessions', { cookie, headers })).status === 200

beforeEach(() => t.clock.set(TEST_NOW))

describe('idle time', () => {
  it('ends a session after 20 minutes without a request', async () => {
    const cookie = await cookieFor(t, admin)
    t.clock.minutes(19)
    expect(await isIn(cookie)).toBe(true)
    t.clock.minutes(19)
    expect(await isIn(cookie)).toBe(true)
    t.clock.minutes(20)
    expect(await isIn(cookie)).toBe(false)
    t.clock.minutes(-20)
    expect(await isIn(cookie)).toBe(false)
  })
  it('is not extended by polling', async () => {
    const cookie = await cookieFor(t, admin)
    for (let minute = 0; minute < 19; minute++) {
      t.clock.minutes(1)
      expect(await isIn(cookie, { 'x-background': '1' })).toBe(true)
    }
    t.clock.minutes(1)
    expect(await isIn(cookie, { 'x-background': '1' })).toBe(false)
  })
})

describe('the end of a session', () => {
  it('comes after 12 hours whatever happens', async () => {
    const cookie = await cookieFor(t, admin)
    for (let minutes = 0; minutes < 12 * 60 - 15; minutes += 15) {
      t.clock.minutes(15)
      expect(await isIn(cookie)).toBe(true)
    }
    t.clock.minutes(15)
    expect(await isIn(cookie)).toBe(false)
  })
  it('comes for every browser at once with "sign out everywhere"', async () => {
    const user = await t.makeUser({ roles: ['administrator'] })
    const cookies = [await cookieFor(t, user), await cookieFor(t, user)]
    const bystander = await cookieFor(t, admin)
    expect((await call('POST', '/api/profile/sign-out-everywhere', { cookie: cookies[0] })).body).toEqual({ ended: 2 })
    for (const cookie of cookies) expect(await isIn(cookie)).toBe(false)
    expect(await isIn(bystander)).toBe(true)
  })
  it('comes for one browser of one\'s own, never for another person\'s', async () => {
    const user = await t.makeUser({ roles: ['administrator'] })
    const [here, there, stranger] = [await cookieFor(t, user), await cookieFor(t, user), await cookieFor(t, admin)]
    const rows = (await call('GET', '/api/profile/sessions', { cookie: here })).body as unknown as { id: string, current: boolean }[]
    const other = rows.find(row => !row.current)!
    expect((await call('DELETE', `/api/profile/sessions/${other.id}`, { cookie: stranger })).status).toBe(404)
    expect(await isIn(there)).toBe(true)
    expect((await call('DELETE', `/api/profile/sessions/${other.id}`, { cookie: here })).status).toBe(200)
    expect(await isIn(there)).toBe(false)
    expect(await isIn(here)).toBe(true)
  })
  it('comes with the end of the account', async () => {
    const user = await t.makeUser({ roles: ['technologist'] })
    const cookie = await cookieFor(t, user)
    await deactivatePerson(t.as(admin), user.id)
    expect(await isIn(cookie)).toBe(false)
    // And if a session were opened at that very moment:
    expect(await isIn(await cookieFor(t, user))).toBe(false)
  })
})

describe('a changed role', () => {
  it('counts at the next request, in both directions', async () => {
    const user = await t.makeUser({ roles: ['technologist'] })
    const cookie = await cookieFor(t, user)
    expect((await call('GET', '/api/signing', { cookie })).status).toBe(403)
    await changePerson(t.as(admin), user.id, { holdings: [{ siteId: site.id, role: 'neurologist' }] })
    expect((await call('GET', '/api/signing', { cookie })).status).toBe(200)
    await changePerson(t.as(admin), user.id, { holdings: [] })
    expect((await call('GET', '/api/signing', { cookie })).status).toBe(403)
  })
  it('begins and ends with the day at the site, not with the day in UTC', async () => {
    const user = await t.makeUser({ roles: ['neurologist'] })
    await t.db.updateTable('roleHolding').set({ startsOn: '2026-12-03', endsOn: '2026-12-04' }).where('userId', '=', user.id).execute()
    const at = async (instant: string) => {
      t.clock.set(instant)
      return (await call('GET', '/api/signing', { cookie: await cookieFor(t, user) })).status
    }
    expect(await at('2026-12-02T22:59:00.000Z')).toBe(403)
    expect(await at('2026-12-02T23:00:00.000Z')).toBe(200)
    expect(await at('2026-12-03T22:59:00.000Z')).toBe(200)
    expect(await at('2026-12-03T23:00:00.000Z')).toBe(403)
  })
})

describe('a signer without a second factor', () => {
  it('can do nothing but look after the own account', async () => {
    const user = await t.makeUser({ roles: ['neurologist'], totpEnabledAt: null })
    const cookie = await cookieFor(t, user)
    expect((await call('GET', '/api/me', { cookie })).body).toMatchObject({ mustEnrol: true })
    const refused = await call('GET', '/api/signing', { cookie })
    expect(refused.status).toBe(403)
    expect(refused.body.code).toBe('second-factor-needed')
    expect(await isIn(cookie)).toBe(true)
  })
})

describe('the cookie', () => {
  it.each([['garbage', 'orthodrome-session-3000=garbage'], ['no cookie', ''], ['another name', 'authjs.session-token=x']])('%s is nobody', async (_name, cookie) => {
    expect((await call('GET', '/api/profile/sessions', { cookie })).status).toBe(401)
    expect((await call('GET', '/api/me', { cookie })).body).toBeFalsy()
  })
  it('is the only way in: a token in the Authorization header is not looked at', async () => {
    const value = (await cookieFor(t, admin)).split('=').slice(1).join('=')
    expect((await call('GET', '/api/profile/sessions', { headers: { authorization: `Bearer ${value}` } })).status).toBe(401)
  })
})

it('an unexpected error says nothing about itself', async () => {
  const answer = await call('GET', '/api/fails', { cookie: await cookieFor(t, admin) })
  expect(answer.status).toBe(500)
  expect(answer.body.code).toBe('unexpected')
  expect(JSON.stringify(answer.body)).not.toMatch(/select|patient|Invented| at /)
})
