import { simpleParser } from 'mailparser'
import { describe, expect, it } from 'vitest'
import type { EventHandler } from 'h3'
import { renderMail } from '#server/email/templates/index'
import { confirmOwnAddress, sendOwnAddressCode } from '#server/services/confirm-own-address'
import { hashPassword } from '#server/services/passwords'
import { runOutboxOnce } from '#server/services/run-outbox'
import { makeSetUpLink, setPassword } from '#server/services/set-up-link'
import { signIn } from '#server/services/sign-in'
import { Secret } from 'otpauth'
import { TEST_NOW, testContext, type MadeUser } from './helpers'
import { serve } from './http'

/** Invitations, forgotten passwords and the own address: by mail, through the outbox. */
const t = await testContext()
await t.makeSite()
const GOOD = 'seven green lanterns'
const OTHER = 'other green lanterns'
const passwordHash = await hashPassword(GOOD)
const admin = await t.makeUser({ roles: ['administrator'] })
const { call } = serve(t, [{ method: 'post', path: '/api/forgotten-password', handler: (await import('../../server/api/forgotten-password.post')).default as EventHandler }])
const received: string[] = []
const transport = { send: async (_envelope: unknown, message: Buffer, beforeLastByte: () => Promise<void>) => {
  await beforeLastByte()
  received.push(message.toString())
  return { kind: 'accepted' as const }
}, close: () => undefined }
async function mails() {
  received.length = 0
  while (await runOutboxOnce(t.context, { transport, owner: 'test' }).then(() => t.db.selectFrom('outboxMail').select('id').where('state', '=', 'queued').executeTakeFirst()));
  return await Promise.all(received.map(text => simpleParser(text)))
}
const tokenIn = (mail: { text?: string }) => /set-password#(\S+)/.exec(mail.text ?? '')![1]!
const account = async (user: MadeUser) => await t.db.selectFrom('user').selectAll().where('id', '=', user.id).executeTakeFirstOrThrow()
const forget = (email: string) => call('POST', '/api/forgotten-password', { body: { email } })
const everythingStored = async () => JSON.stringify([await t.db.selectFrom('oneTimeLink').selectAll().execute(), await t.db.selectFrom('outboxMail').selectAll().execute(), await t.db.selectFrom('auditEvent').selectAll().execute()])

describe('the words', () => {
  const words = [
    ['account-link', { about: 'invitation', token: 'a-token-of-20-letters', hours: 72, organisation: 'Invented Clinics' }],
    ['account-link', { about: 'reset', token: 'a-token-of-20-letters', hours: 2, organisation: 'Invented Clinics' }],
    ['account-notice', { about: 'role-wanted', role: 'medical director', organisation: 'Invented Clinics' }],
    ['account-notice', { about: 'role-given', role: 'administrator', organisation: 'Invented Clinics' }],
    ['account-notice', { about: 'two-people-needed', organisation: 'Invented Clinics' }],
    ['confirm-address', { code: 'ABCDE-FGHJK', hours: 2, organisation: 'Invented Clinics' }],
  ] as const
  it.each(words)('%s %o: secrets stand in the text alone, behind # or as a code, and nobody is named', (name, data) => {
    const mail = renderMail(name, data, 'https://lab.example')
    expect(mail.subject).toContain('Invented Clinics')
    for (const secret of ['a-token', 'ABCDE']) expect(mail.subject).not.toContain(secret)
    if (name === 'account-link') expect([mail.text.includes('https://lab.example/set-password#a-token-of-20-letters'), mail.html.includes('href="https://lab.example/set-password#a-token-of-20-letters"')]).toEqual([true, true])
    else expect(mail.html).not.toContain('href')
  })
})

describe('an invitation by mail', () => {
  it('brings a link to the mailbox and nobody else; using it sets the password once and proves the address', async () => {
    const user = await t.makeUser({ roles: ['technologist'], totpEnabledAt: null, emailConfirmedAt: null })
    expect(await makeSetUpLink(t.as(admin), user.id, { resetSecondFactor: false, byMail: true })).toEqual({ waiting: false, link: null, mailedTo: user.email, expiresAt: '2026-12-05T09:00:00.000Z' })
    const [mail] = await mails()
    expect((mail!.to as { text: string }).text).toBe(user.email)
    const token = tokenIn(mail!)
    expect(mail!.subject).not.toContain(token)
    expect(await everythingStored()).not.toContain(token)
    await setPassword(t.context, { token, password: GOOD })
    expect(await account(user)).toMatchObject({ emailConfirmedAt: TEST_NOW })
    await expect(setPassword(t.context, { token, password: OTHER })).rejects.toMatchObject({ code: 'link-used' })
  })
  it('is worth nothing after 72 hours, after a newer one, and after the address changed', async () => {
    const user = await t.makeUser({ roles: ['technologist'], totpEnabledAt: null, emailConfirmedAt: null })
    const invite = async () => {
      await makeSetUpLink(t.as(admin), user.id, { resetSecondFactor: false, byMail: true })
      return tokenIn((await mails())[0]!)
    }
    const older = await invite()
    const newer = await invite()
    await expect(setPassword(t.context, { token: older, password: GOOD })).rejects.toMatchObject({ code: 'link-used' })
    t.clock.minutes(72 * 60)
    await expect(setPassword(t.context, { token: newer, password: GOOD })).rejects.toMatchObject({ code: 'link-used' })
    t.clock.set(TEST_NOW)
    const { changePerson } = await import('#server/services/change-person')
    const third = await invite()
    await changePerson(t.as(admin), user.id, { email: 'elsewhere@clinic.example' })
    await expect(setPassword(t.context, { token: third, password: GOOD })).rejects.toMatchObject({ code: 'link-used' })
  })
})

describe('a forgotten password', () => {
  it('is answered alike for an account, a signer, a deactivated person and nobody', async () => {
    const people = [await t.makeUser({ roles: ['technologist'], passwordHash }), await t.makeUser({ roles: ['neurologist'], passwordHash }), await t.makeUser({ passwordHash, deactivatedAt: TEST_NOW }), await t.makeUser({ roles: ['technologist'], passwordHash, emailConfirmedAt: null })]
    const answers = []
    for (const email of [...people.map(person => person.email), 'nobody@elsewhere.example']) answers.push(await forget(email))
    for (const answer of answers) expect([answer.status, answer.body]).toEqual([200, { done: true }])
    const sent = await mails()
    expect(sent.map(mail => (mail.to as { text: string }).text).sort()).toEqual([people[0]!.email, people[1]!.email].sort())
    const toSigner = sent.find(mail => (mail.to as { text: string }).text === people[1]!.email)!
    expect(toSigner.text).toContain('two people')
    expect(toSigner.text).not.toContain('set-password')
    expect(await t.db.selectFrom('task').select(['subjectId', 'ownerRole']).where('kind', '=', 'password-forgotten').execute()).toEqual(expect.arrayContaining([{ subjectId: people[1]!.id, ownerRole: 'administrator' }, { subjectId: people[3]!.id, ownerRole: 'administrator' }]))
  })
  it('the link sets the password and passes no second factor', async () => {
    const secret = new Secret({ size: 20 })
    const user = await t.makeUser({ roles: ['administrator'], passwordHash, totpSecretSealed: t.keys.seal(secret.base32) })
    await forget(user.email)
    const token = tokenIn((await mails()).find(mail => mail.text!.includes('set-password'))!)
    await setPassword(t.context, { token, password: OTHER })
    expect(await account(user)).toMatchObject({ totpEnabledAt: TEST_NOW, totpSecretSealed: user.totpSecretSealed })
    await expect(signIn(t.context, { email: user.email, password: OTHER, code: '', address: '192.0.2.7', agent: '', deviceMark: () => undefined, previousSessionId: null })).rejects.toMatchObject({ code: 'sign-in-failed' })
  })
  it('writes three mails an hour at most, and the answer stays the same', async () => {
    const user = await t.makeUser({ roles: ['technologist'], passwordHash })
    for (let n = 0; n < 5; n++) expect((await forget(user.email.toUpperCase())).body).toEqual({ done: true })
    expect((await mails()).length).toBe(3)
  })
  it('takes as long for nobody as for somebody', async () => {
    const user = await t.makeUser({ roles: ['technologist'], passwordHash })
    const time = async (email: string) => {
      const start = performance.now()
      await forget(email)
      return performance.now() - start
    }
    expect(Math.min(await time(user.email), await time('nobody@nowhere.example'))).toBeGreaterThan(390)
  })
})

describe('the own address', () => {
  const codeIn = async () => /Code: (\S+)/.exec((await mails()).map(mail => mail.text ?? '').find(text => text.includes('Code: '))!)![1]!
  it('is confirmed by a code that goes there, with the password asked again', async () => {
    const user = await t.makeUser({ roles: ['technologist'], passwordHash, emailConfirmedAt: null })
    await expect(sendOwnAddressCode(t.as(user), { userId: user.id, email: user.email, password: 'wrong' })).rejects.toMatchObject({ code: 'wrong-password' })
    await sendOwnAddressCode(t.as(user), { userId: user.id, email: user.email, password: GOOD })
    const code = await codeIn()
    expect(await everythingStored()).not.toContain(code.replace('-', ''))
    await expect(confirmOwnAddress(t.as(user), { userId: user.id, code: 'AAAAA-AAAAA', sessionHash: '' })).rejects.toMatchObject({ code: 'not-valid' })
    expect(await confirmOwnAddress(t.as(user), { userId: user.id, code: code.toLowerCase(), sessionHash: '' })).toEqual({ changed: false })
    expect((await account(user)).emailConfirmedAt).toBe(TEST_NOW)
  })
  it('a new one counts once its code came back; the trail has both', async () => {
    const user = await t.makeUser({ roles: ['neurologist'], passwordHash })
    await sendOwnAddressCode(t.as(user), { userId: user.id, email: 'Fresh@clinic.example', password: GOOD })
    const code = await codeIn()
    expect((await account(user)).email).toBe(user.email)
    expect(await confirmOwnAddress(t.as(user), { userId: user.id, code, sessionHash: '' })).toEqual({ changed: true })
    expect(await account(user)).toMatchObject({ email: 'fresh@clinic.example', emailConfirmedAt: TEST_NOW })
    const event = await t.db.selectFrom('auditEvent').select('dataJson').where('name', '=', 'account.profile-changed').where('subjectId', '=', user.id).executeTakeFirstOrThrow()
    expect(JSON.parse(event.dataJson)).toEqual({ changes: [{ field: 'email', before: user.email, after: 'fresh@clinic.example' }] })
  })
  it('five wrong codes and the right one is refused too', async () => {
    const user = await t.makeUser({ passwordHash, emailConfirmedAt: null })
    await sendOwnAddressCode(t.as(user), { userId: user.id, email: user.email, password: GOOD })
    const code = await codeIn()
    for (let n = 0; n < 5; n++) await expect(confirmOwnAddress(t.as(user), { userId: user.id, code: 'BBBBB-BBBBB', sessionHash: '' })).rejects.toMatchObject({ code: 'not-valid' })
    await expect(confirmOwnAddress(t.as(user), { userId: user.id, code, sessionHash: '' })).rejects.toMatchObject({ code: 'not-valid' })
  })
})
