import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest'
import auth from '../../server/api/auth/[...]'
import me from '../../server/api/me.get'
import { hashPassword } from '#server/services/passwords'
import { TEST_NOW, testContext } from './helpers'
import { serve } from './http'

const PASSWORD = 'seven green lanterns'
const t = await testContext()
await t.makeSite()
const passwordHash = await hashPassword(PASSWORD)
const { call } = serve(t, [
  { method: 'get', path: '/api/auth/**', handler: auth },
  { method: 'post', path: '/api/auth/**', handler: auth },
  { method: 'get', path: '/api/me', handler: me },
])
let people = 0
const person = (changes = {}) => t.makeUser({ roles: ['technologist'], totpEnabledAt: null, passwordHash, email: `signer${++people}@clinic.example`, ...changes })

interface Options { cookie?: string, address?: string, code?: string }
/** As the sign-in page does it: fetch Auth.js's token, then post. */
async function signIn(email: string, password: string, { cookie = '', address = '192.0.2.1', code = '' }: Options = {}) {
  const headers = { 'x-forwarded-for': address, 'x-auth-return-redirect': '1' }
  const csrf = await call('GET', '/api/auth/csrf', { cookie, headers })
  const answer = await call('POST', '/api/auth/callback/credentials', { cookie: `${csrf.cookies}; ${cookie}`, headers, body: new URLSearchParams({ csrfToken: String(csrf.body.csrfToken), email, password, code, callbackUrl: '/' }) })
  const query = new URL(String(answer.body.url)).searchParams
  return { ...answer, error: query.get('error'), code: query.get('code') }
}

beforeEach(() => {
  t.settings.trustProxy = true
  t.clock.set(TEST_NOW)
})
afterEach(() => void vi.useRealTimers())

describe('signing in', () => {
  it('opens a session whose cookie is HttpOnly, SameSite and holds no name', async () => {
    const user = await person()
    const answer = await signIn(user.email.toUpperCase(), PASSWORD)
    expect(answer.error).toBeNull()
    const cookie = answer.headers.getSetCookie().find(line => line.startsWith('orthodrome-session-3000='))!
    expect(cookie).toMatch(/HttpOnly/)
    expect(cookie).toMatch(/SameSite=Lax/)
    expect((await call('GET', '/api/me', { cookie: answer.cookies })).body).toMatchObject({ id: user.id, holdings: [{ role: 'technologist' }] })
    const row = await t.db.selectFrom('session').selectAll().where('userId', '=', user.id).executeTakeFirstOrThrow()
    expect(cookie).not.toContain(row.idHash)
  })
  it('ends the session that this browser had before', async () => {
    const user = await person()
    const first = await signIn(user.email, PASSWORD)
    const second = await signIn(user.email, PASSWORD, { cookie: first.cookies })
    expect((await call('GET', '/api/me', { cookie: first.cookies })).body).toBeFalsy()
    expect((await call('GET', '/api/me', { cookie: second.cookies })).body).toMatchObject({ id: user.id })
  })
  it('is over for every copy of the cookie after signing out', async () => {
    const user = await person()
    const { cookies } = await signIn(user.email, PASSWORD)
    const csrf = await call('GET', '/api/auth/csrf', { cookie: cookies })
    await call('POST', '/api/auth/signout', { cookie: `${csrf.cookies}; ${cookies}`, headers: { 'x-auth-return-redirect': '1' }, body: new URLSearchParams({ csrfToken: String(csrf.body.csrfToken) }) })
    expect((await call('GET', '/api/me', { cookie: cookies })).body).toBeFalsy()
  })
  it('needs Auth.js\'s own token', async () => {
    const user = await person()
    const answer = await call('POST', '/api/auth/callback/credentials', { headers: { 'x-auth-return-redirect': '1' }, body: new URLSearchParams({ email: user.email, password: PASSWORD }) })
    expect(new URL(String(answer.body.url)).searchParams.get('error')).toBe('MissingCSRF')
  })
  it('leads nowhere but to our own pages', async () => {
    const user = await person()
    const csrf = await call('GET', '/api/auth/csrf')
    const answer = await call('POST', '/api/auth/callback/credentials', { cookie: csrf.cookies, headers: { 'x-auth-return-redirect': '1' }, body: new URLSearchParams({ csrfToken: String(csrf.body.csrfToken), email: user.email, password: PASSWORD, callbackUrl: 'https://elsewhere.example/' }) })
    expect(String(answer.body.url)).toMatch(/^http:\/\/127\.0\.0\.1:3000/)
  })
  it.each(['/api/auth/session', '/api/auth/signin', '/api/auth/providers'])('%s is not in use', async (path) => {
    expect((await call('GET', path)).status).toBe(401)
  })
})

describe('a refused sign-in', () => {
  it('looks the same whatever was wrong, and the audit trail knows which', async () => {
    const user = await person()
    const closed = await person({ deactivatedAt: TEST_NOW })
    const unset = await person({ passwordHash: null })
    const tries: [string, string, string][] = [[user.email, 'wrong', 'wrong password'], ['nobody@clinic.example', PASSWORD, 'no such account'], [closed.email, PASSWORD, 'deactivated account'], [unset.email, PASSWORD, 'wrong password']]
    const answers = []
    for (const [email, password, because] of tries) {
      const { status, body, code } = await signIn(email, password, { address: '192.0.2.2' })
      answers.push({ status, body, code })
      const event = await t.db.selectFrom('auditEvent').selectAll().orderBy('seq', 'desc').limit(1).executeTakeFirstOrThrow()
      expect(event).toMatchObject({ name: 'session.refused', dataJson: JSON.stringify({ because, address: '192.0.2.2' }) })
      expect(JSON.stringify(event)).not.toContain('@')
    }
    expect(new Set(answers.map(answer => JSON.stringify(answer))).size).toBe(1)
    expect(answers[0]!.code).toBe('sign-in-failed')
  })
  it('takes as long for an unknown address as for a known one', async () => {
    const user = await person()
    const time = async (email: string, n: number) => {
      const start = performance.now()
      await signIn(email, 'wrong', { address: `198.51.100.${n}` })
      return performance.now() - start
    }
    await time('warm@clinic.example', 250)
    const median = (values: number[]) => values.sort((a, b) => a - b)[Math.floor(values.length / 2)]!
    const known: number[] = []
    const unknown: number[] = []
    for (let n = 0; n < 7; n++) {
      known.push(await time(user.email, n))
      unknown.push(await time(`nobody${n}@clinic.example`, n + 100))
    }
    // Without the dummy hash an unknown address answers about ten times as fast.
    expect(median(unknown) / median(known)).toBeGreaterThan(0.4)
  })
})

describe('guessing', () => {
  it('at one account from many addresses is stopped after 20, and the person\'s own workstation goes on', async () => {
    const user = await person()
    const own = await signIn(user.email, PASSWORD, { address: '192.0.2.10' })
    for (let n = 0; n < 20; n++) expect((await signIn(user.email, 'wrong', { address: `203.0.113.${n}` })).code).toBe('sign-in-failed')
    const stopped = await signIn(user.email, PASSWORD, { address: '203.0.113.99' })
    expect(stopped.code).toBe('too-many-requests')
    expect(Number(stopped.headers.get('retry-after'))).toBeGreaterThan(0)
    // The own browser carries the device mark of the earlier sign-in.
    expect((await signIn(user.email, PASSWORD, { cookie: own.cookies, address: '192.0.2.10' })).error).toBeNull()
  })
  it('by a colleague at the next desk, behind the same address, locks nobody out of a known browser', async () => {
    const user = await person()
    const own = await signIn(user.email, PASSWORD, { address: '192.0.2.20' })
    for (let n = 0; n < 45; n++) await signIn(`victim${n % 15}@clinic.example`, 'wrong', { address: '192.0.2.20' })
    expect((await signIn(user.email, PASSWORD, { address: '192.0.2.20' })).code).toBe('too-many-requests')
    expect((await signIn(user.email, PASSWORD, { cookie: own.cookies, address: '192.0.2.20' })).error).toBeNull()
  })
  it('with a device mark made for someone else, or made up anew each time, gains nothing', async () => {
    const [user, colleague] = [await person(), await person()]
    const { headers } = await signIn(colleague.email, PASSWORD, { address: '192.0.2.30' })
    const mark = headers.getSetCookie().find(line => line.includes('device-'))!.split(';')[0]!.split('=')[1]!
    const name = `orthodrome-device-${t.keys.tokenHash(`device-name:${user.id}`).slice(0, 16)}-3000`
    const madeUp = (n: number) => n % 2 ? mark : `${n}.${mark.split('.').slice(1).join('.')}`
    for (let n = 0; n < 20; n++) expect((await signIn(user.email, 'wrong', { address: `192.0.2.${40 + n}`, cookie: `${name}=${madeUp(n)}` })).code).toBe('sign-in-failed')
    expect((await signIn(user.email, 'wrong', { address: '192.0.2.90', cookie: `${name}=${madeUp(98)}` })).code).toBe('too-many-requests')
  })
  it('is over after a quarter of an hour, and is one entry in the audit trail', async () => {
    const user = await person()
    vi.useFakeTimers({ toFake: ['Date', 'setTimeout'], now: Date.now(), shouldAdvanceTime: true })
    for (let n = 0; n < 25; n++) await signIn(user.email, 'wrong', { address: `203.0.113.${100 + n}` })
    const entries = await t.db.selectFrom('auditEvent').select('dataJson').where('subjectId', '=', user.id).where('name', '=', 'session.refused').execute()
    expect(entries).toHaveLength(21)
    vi.advanceTimersByTime(15 * 60_000 + 1_000)
    expect((await signIn(user.email, PASSWORD, { address: '203.0.113.150' })).error).toBeNull()
  })
  it('is counted by the socket\'s address unless a proxy of ours is set', async () => {
    t.settings.trustProxy = false
    const codes = []
    for (let n = 0; n < 42; n++) codes.push((await signIn(`stranger${n}@clinic.example`, 'wrong', { address: `203.0.113.${n}` })).code)
    expect(codes.at(-1)).toBe('too-many-requests')
  })
})
