import { Secret, TOTP } from 'otpauth'
import { describe, expect, it } from 'vitest'
import { changePerson } from '#server/services/change-person'
import { hashPassword } from '#server/services/passwords'
import { confirmSecondFactor, startSecondFactor } from '#server/services/second-factor'
import { makeSetUpLink, setPassword } from '#server/services/set-up-link'
import { signIn } from '#server/services/sign-in'
import { cookieValue } from '#server/utils/auth-cookie'
import { testContext, type MadeUser } from './helpers'

/** What an administrator alone, or whoever holds a password alone, must not be able to do. */
const t = await testContext()
const site = await t.makeSite()
const PASSWORD = 'seven green lanterns'
const passwordHash = await hashPassword(PASSWORD)
const admin = await t.makeUser({ roles: ['administrator'] })
const second = await t.makeUser({ roles: ['administrator'] })
const signer = () => t.makeUser({ roles: ['neurologist'], passwordHash, totpSecretSealed: t.keys.seal(new Secret({ size: 20 }).base32) })
const roleOf = { siteId: site.id, role: 'neurologist' } as const
const tokenOf = (answer: { waiting: boolean, link?: string | null }) => answer.link!.split('#')[1]!
const account = (user: MadeUser) => t.db.selectFrom('user').select(['passwordHash', 'totpSecretSealed']).where('id', '=', user.id).executeTakeFirstOrThrow()

describe('one administrator alone cannot take over a signer', () => {
  it('by ending the role, making the link, and giving the role back', async () => {
    const user = await signer()
    await changePerson(t.as(admin), user.id, { holdings: [] })
    expect(await makeSetUpLink(t.as(admin), user.id, { resetSecondFactor: true })).toEqual({ waiting: true })
    expect(await makeSetUpLink(t.as(admin), user.id, { resetSecondFactor: true })).toEqual({ waiting: true })
    const answer = await makeSetUpLink(t.as(second), user.id, { resetSecondFactor: true })
    await setPassword(t.context, { token: tokenOf(answer), password: 'other green lanterns' })
    expect((await account(user)).totpSecretSealed).toBeNull()
  })
  it('by making the link before the person becomes a signer and using it afterwards', async () => {
    const user = await t.makeUser({ roles: ['technologist'], passwordHash })
    const token = tokenOf(await makeSetUpLink(t.as(admin), user.id, { resetSecondFactor: true }))
    await changePerson(t.as(admin), user.id, { holdings: [{ siteId: site.id, role: 'technologist' }, roleOf] })
    await expect(setPassword(t.context, { token, password: 'other green lanterns' })).rejects.toMatchObject({ code: 'link-used' })
    expect((await account(user)).passwordHash).toBe(passwordHash)
  })
  it('while a new signer, who has no password yet, sets one through a link of one administrator', async () => {
    const user = await t.makeUser({ roles: ['neurologist'], totpEnabledAt: null })
    const token = tokenOf(await makeSetUpLink(t.as(admin), user.id, { resetSecondFactor: false }))
    await setPassword(t.context, { token, password: 'other green lanterns' })
    expect((await account(user)).passwordHash).not.toBeNull()
  })
})

describe('a second factor cannot be guessed at an open session', () => {
  it('with the password known, ten wrong codes close the way for a quarter of an hour', async () => {
    const user = await signer()
    const { secret } = await startSecondFactor(t.as(user), user)
    const code = new TOTP({ secret: Secret.fromBase32(secret) }).generate({ timestamp: t.context.clock().getTime() })
    const guess = () => confirmSecondFactor(t.as(user), { userId: user.id, password: PASSWORD, code, currentCode: 'AAAA-AAAA-AAAA-AAAA', agent: '' })
    for (let tries = 0; tries < 10; tries++) await expect(guess()).rejects.toMatchObject({ code: 'not-valid' })
    await expect(guess()).rejects.toMatchObject({ code: 'too-many-requests' })
  })
})

describe('a sign-in under way', () => {
  it('opens no session with a password that was replaced while it was checked', async () => {
    const user = await t.makeUser({ roles: ['technologist'], passwordHash, totpEnabledAt: null })
    const newHash = await hashPassword('other green lanterns')
    const attempt = signIn(t.context, { email: user.email, password: PASSWORD, code: '', address: '192.0.2.1', agent: '', deviceMark: () => undefined, previousSessionId: null })
    // The password is checked outside the database for some ten milliseconds; this update comes in between.
    await new Promise(resolve => setTimeout(resolve, 8))
    await t.db.updateTable('user').set({ passwordHash: newHash }).where('id', '=', user.id).execute()
    await expect(attempt).rejects.toMatchObject({ code: 'sign-in-failed' })
    expect(await t.db.selectFrom('session').selectAll().where('userId', '=', user.id).execute()).toEqual([])
  })
})

it('a damaged cookie is no cookie, not a fault', () => {
  expect(cookieValue('orthodrome-session-3000=%', 'orthodrome-session-3000')).toBeUndefined()
  expect(cookieValue('a=1; orthodrome-session-3000=b%20c', 'orthodrome-session-3000')).toBe('b c')
})
