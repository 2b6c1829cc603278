import { Secret, TOTP } from 'otpauth'
import { beforeEach, describe, expect, it } from 'vitest'
import { hashPassword } from '#server/services/passwords'
import { confirmSecondFactor, startSecondFactor } from '#server/services/second-factor'
import { signIn } from '#server/services/sign-in'
import { TEST_NOW, testContext, type MadeUser } from './helpers'

const PASSWORD = 'seven green lanterns'
const t = await testContext()
await t.makeSite()
const passwordHash = await hashPassword(PASSWORD)
const codeOf = (secret: string) => new TOTP({ secret: Secret.fromBase32(secret) }).generate({ timestamp: t.context.clock().getTime() })
let attempts = 0
const attempt = (user: MadeUser, code: string, password = PASSWORD) => signIn(t.context, { email: user.email, password, code, address: `192.0.2.${++attempts % 250}`, agent: 'test', deviceMark: () => undefined, previousSessionId: null })
const refused = { code: 'sign-in-failed' }

async function enrolled() {
  const user = await t.makeUser({ roles: ['neurologist'], passwordHash, totpEnabledAt: null })
  const { secret, uri, qrSvg } = await startSecondFactor(t.as(user), user)
  const { recoveryCodes } = await confirmSecondFactor(t.as(user), { userId: user.id, password: PASSWORD, code: codeOf(secret), currentCode: '', agent: '' })
  return { user, secret, uri, qrSvg, recoveryCodes }
}
beforeEach(() => t.clock.set(TEST_NOW))

describe('setting up', () => {
  it('gives a secret of 160 bits, a picture, and ten recovery codes; the database holds neither in clear', async () => {
    const { user, secret, uri, qrSvg, recoveryCodes } = await enrolled()
    expect(Secret.fromBase32(secret).bytes).toHaveLength(20)
    expect(uri).toMatch(/^otpauth:\/\/totp\/Orthodrome/)
    expect(qrSvg).toMatch(/^<svg/)
    expect(new Set(recoveryCodes).size).toBe(10)
    const stored = JSON.stringify([await t.db.selectFrom('user').selectAll().where('id', '=', user.id).execute(), await t.db.selectFrom('recoveryCode').selectAll().execute(), await t.db.selectFrom('oneTimeLink').selectAll().execute()])
    for (const word of [secret, ...recoveryCodes]) expect(stored).not.toContain(word)
  })
  it('changes nothing with a wrong code, a wrong password, or after ten minutes', async () => {
    const user = await t.makeUser({ roles: ['neurologist'], passwordHash, totpEnabledAt: null })
    const { secret } = await startSecondFactor(t.as(user), user)
    const confirm = (changes: object) => confirmSecondFactor(t.as(user), { userId: user.id, password: PASSWORD, code: codeOf(secret), currentCode: '', agent: '', ...changes })
    await expect(confirm({ code: '000000' })).rejects.toMatchObject({ code: 'not-valid' })
    await expect(confirm({ password: 'wrong' })).rejects.toMatchObject({ code: 'wrong-password' })
    t.clock.minutes(10)
    await expect(confirm({})).rejects.toMatchObject({ code: 'link-used' })
    expect((await t.db.selectFrom('user').select('totpEnabledAt').where('id', '=', user.id).executeTakeFirstOrThrow()).totpEnabledAt).toBeNull()
  })
  it('of a new one needs a code of the old one', async () => {
    const { user, secret } = await enrolled()
    t.clock.minutes(1)
    const next = await startSecondFactor(t.as(user), user)
    const input = { userId: user.id, password: PASSWORD, code: codeOf(next.secret), agent: '' }
    await expect(confirmSecondFactor(t.as(user), { ...input, currentCode: '' })).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ path: 'currentCode' }] } })
    await expect(attempt(user, codeOf(secret))).resolves.toBeTruthy()
    t.clock.minutes(1)
    await confirmSecondFactor(t.as(user), { ...input, code: codeOf(next.secret), currentCode: codeOf(secret) })
    t.clock.minutes(1)
    await expect(attempt(user, codeOf(secret))).rejects.toMatchObject(refused)
    await expect(attempt(user, codeOf(next.secret))).resolves.toBeTruthy()
  })
})

describe('a code', () => {
  it('is needed, and counts for nothing without the password', async () => {
    const { user, secret } = await enrolled()
    t.clock.minutes(1)
    await expect(attempt(user, '')).rejects.toMatchObject(refused)
    await expect(attempt(user, codeOf(secret), 'wrong')).rejects.toMatchObject(refused)
    await expect(attempt(user, codeOf(secret))).resolves.toBeTruthy()
  })
  it('counts once: neither it nor an earlier one is taken again', async () => {
    const { user, secret } = await enrolled()
    await expect(attempt(user, codeOf(secret))).rejects.toMatchObject(refused)
    t.clock.minutes(1)
    const earlier = codeOf(secret)
    t.clock.advance(30_000)
    const code = codeOf(secret)
    await expect(attempt(user, code)).resolves.toBeTruthy()
    await expect(attempt(user, code)).rejects.toMatchObject(refused)
    await expect(attempt(user, earlier)).rejects.toMatchObject(refused)
  })
  it('used twice at the same moment opens one session', async () => {
    const { user, secret } = await enrolled()
    t.clock.minutes(1)
    const results = await Promise.allSettled([attempt(user, codeOf(secret)), attempt(user, codeOf(secret))])
    expect(results.map(result => result.status).sort()).toEqual(['fulfilled', 'rejected'])
  })
  it('is taken one step early or late, not two', async () => {
    const { user, secret } = await enrolled()
    t.clock.minutes(5)
    const code = codeOf(secret)
    t.clock.advance(60_000)
    await expect(attempt(user, code)).rejects.toMatchObject(refused)
    t.clock.advance(-30_000)
    await expect(attempt(user, code)).resolves.toBeTruthy()
  })
})

describe('a recovery code', () => {
  it('opens a session once, in any spelling, and is said in the audit trail', async () => {
    const { user, recoveryCodes: [code] } = await enrolled()
    await expect(attempt(user, code!.toLowerCase().replaceAll('-', ' '))).resolves.toBeTruthy()
    await expect(attempt(user, code!)).rejects.toMatchObject(refused)
    const event = await t.db.selectFrom('auditEvent').selectAll().where('actorId', '=', user.id).where('name', '=', 'session.signed-in').executeTakeFirstOrThrow()
    expect(JSON.parse(event.dataJson)).toEqual({ secondFactor: true, recoveryCode: true })
  })
  it('of another person is worth nothing', async () => {
    const [one, other] = [await enrolled(), await enrolled()]
    await expect(attempt(one.user, other.recoveryCodes[0]!)).rejects.toMatchObject(refused)
  })
})
