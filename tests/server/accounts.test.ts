import { describe, expect, it } from 'vitest'
import { changePassword } from '#server/services/change-password'
import { addPerson, changePerson, deactivatePerson } from '#server/services/change-person'
import { addSite, changeSite } from '#server/services/change-site'
import { makeFirstAdministrator, writeFirstRunLink } from '#server/services/first-run'
import { listPeople, viewPerson } from '#server/services/people'
import { hashPassword, verifyPassword } from '#server/services/passwords'
import { createSession } from '#server/services/sessions'
import { makeSetUpLink, setPassword } from '#server/services/set-up-link'
import { verifyOwnPassword } from '#server/services/verify-own-password'
import { listLedger } from '#server/database/queries/ledger'
import { sitesWhere } from '#server/services/context'
import { ledgerQuerySchema, personSchema, siteSchema } from '#shared/schemas/user'
import { pageQuerySchema } from '#shared/schemas/common'
import { TEST_NOW, testContext } from './helpers'

const t = await testContext()
const north = await t.makeSite({ name: 'North Clinic' })
const south = await t.makeSite({ name: 'South Clinic' })
const at = (siteId: string, role: 'administrator' | 'technologist' | 'neurologist' | 'medical-director') => ({ siteId, role })
const northAdmin = await t.makeUser({ roles: [at(north.id, 'administrator')] })
const southAdmin = await t.makeUser({ roles: [at(south.id, 'administrator')] })
const bothAdmin = await t.makeUser({ roles: ['administrator'] })
const director = await t.makeUser({ roles: ['medical-director'] })
const newPerson = (changes: object = {}) => personSchema.parse({ email: `added${Math.random()}@clinic.example`, name: 'Added Person', ...changes })
const tokenOf = (answer: { waiting: boolean, link?: string | null }) => answer.link!.split('#')[1]!
const GOOD = 'seven green lanterns'

describe('the administrator of one site', () => {
  it('gives roles there and nowhere else', async () => {
    const id = await addPerson(t.as(northAdmin), newPerson({ holdings: [at(north.id, 'technologist')] }))
    expect((await viewPerson(t.as(northAdmin), [north.id], id)).holdings).toMatchObject([{ siteId: north.id, role: 'technologist' }])
    await expect(addPerson(t.as(northAdmin), newPerson({ holdings: [at(south.id, 'technologist')] }))).rejects.toMatchObject({ code: 'not-allowed' })
    await expect(changePerson(t.as(northAdmin), northAdmin.id, { holdings: [at(north.id, 'administrator'), at(south.id, 'administrator')] })).rejects.toMatchObject({ code: 'not-allowed' })
  })
  it('does not touch roles at another site, nor the account of someone who works there too', async () => {
    const user = await t.makeUser({ roles: [at(north.id, 'technologist'), at(south.id, 'technologist')] })
    for (const act of [changePerson(t.as(northAdmin), user.id, { email: 'taken-over@clinic.example' }), deactivatePerson(t.as(northAdmin), user.id), makeSetUpLink(t.as(northAdmin), user.id, { resetSecondFactor: false })]) {
      await expect(act).rejects.toMatchObject({ code: 'not-allowed' })
    }
    await changePerson(t.as(northAdmin), user.id, { holdings: [] })
    expect((await viewPerson(t.as(bothAdmin), [north.id, south.id], user.id)).holdings).toMatchObject([{ siteId: south.id }])
  })
  it('sees the people of that site and those without a role, and no role elsewhere', async () => {
    const user = await t.makeUser({ name: 'Works Twice', roles: [at(north.id, 'technologist'), at(south.id, 'technologist')] })
    const query = pageQuerySchema.parse({ search: 'Works Tw' })
    const page = await listPeople(t.as(northAdmin), sitesWhere(t.as(northAdmin).actor, 'people.read'), query)
    expect(page.rows).toMatchObject([{ id: user.id, holdings: [{ siteId: north.id }] }])
    const onlySouth = await t.makeUser({ name: 'Only South', roles: [at(south.id, 'technologist')] })
    await expect(viewPerson(t.as(northAdmin), [north.id], onlySouth.id)).rejects.toMatchObject({ code: 'not-found' })
  })
  it('cannot leave a site without an administrator', async () => {
    await deactivatePerson(t.as(bothAdmin), southAdmin.id)
    await expect(changePerson(t.as(bothAdmin), bothAdmin.id, { holdings: [at(north.id, 'administrator')] })).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ message: expect.stringContaining('South Clinic would have no administrator') }] } })
    await expect(deactivatePerson(t.as(bothAdmin), bothAdmin.id)).rejects.toMatchObject({ code: 'not-valid' })
  })
})

describe('one address', () => {
  it('belongs to one account, whatever the case', async () => {
    await addPerson(t.as(bothAdmin), newPerson({ email: 'one@clinic.example' }))
    await expect(addPerson(t.as(bothAdmin), newPerson({ email: 'ONE@clinic.example' }))).rejects.toMatchObject({ options: { fields: [{ path: 'email' }] } })
  })
})

describe('a link to set a password', () => {
  it('works once, for a day, and ends every session', async () => {
    const user = await t.makeUser({ roles: ['technologist'], totpEnabledAt: null })
    const token = tokenOf(await makeSetUpLink(t.as(bothAdmin), user.id, { resetSecondFactor: false }))
    await t.db.transaction().execute(trx => createSession(t.context, trx, { userId: user.id, secondFactor: false, agent: '' }))
    await expect(setPassword(t.context, { token, password: 'short' })).rejects.toMatchObject({ code: 'not-valid' })
    await setPassword(t.context, { token, password: GOOD })
    expect(await verifyOwnPassword(t.context, user.id, GOOD)).toBe(true)
    expect(await t.db.selectFrom('session').select('idHash').where('userId', '=', user.id).where('endedAt', 'is', null).execute()).toEqual([])
    await expect(setPassword(t.context, { token, password: GOOD })).rejects.toMatchObject({ code: 'link-used' })
  })
  it('is too old after a day, and a newer one ends an older one', async () => {
    const user = await t.makeUser({ roles: ['technologist'] })
    const older = tokenOf(await makeSetUpLink(t.as(bothAdmin), user.id, { resetSecondFactor: false }))
    const newer = tokenOf(await makeSetUpLink(t.as(bothAdmin), user.id, { resetSecondFactor: false }))
    await expect(setPassword(t.context, { token: older, password: GOOD })).rejects.toMatchObject({ code: 'link-used' })
    t.clock.minutes(24 * 60)
    await expect(setPassword(t.context, { token: newer, password: GOOD })).rejects.toMatchObject({ code: 'link-used' })
    t.clock.set(TEST_NOW)
  })
  it('for a signer with a password is made by two people together, never by one, and keeps the second factor', async () => {
    const signer = await t.makeUser({ roles: ['neurologist'], passwordHash: await hashPassword(GOOD), totpSecretSealed: 'sealed' })
    expect(await makeSetUpLink(t.as(bothAdmin), signer.id, { resetSecondFactor: false })).toEqual({ waiting: true })
    expect(await makeSetUpLink(t.as(bothAdmin), signer.id, { resetSecondFactor: false })).toEqual({ waiting: true })
    expect(await makeSetUpLink(t.as(director), signer.id, { resetSecondFactor: true })).toEqual({ waiting: true })
    const answer = await makeSetUpLink(t.as(director), signer.id, { resetSecondFactor: false })
    await setPassword(t.context, { token: tokenOf(answer), password: 'other green lanterns' })
    expect(await t.db.selectFrom('user').select(['totpEnabledAt', 'totpSecretSealed']).where('id', '=', signer.id).executeTakeFirst()).toEqual({ totpEnabledAt: TEST_NOW, totpSecretSealed: 'sealed' })
    const event = await t.db.selectFrom('auditEvent').selectAll().where('name', '=', 'account.link-made').where('subjectId', '=', signer.id).executeTakeFirstOrThrow()
    expect(event).toMatchObject({ actorId: director.id, dataJson: JSON.stringify({ askedBy: bothAdmin.id, byMail: false }) })
  })
  it('resets the second factor of a signer only when two asked for that, and the long password is then needed', async () => {
    const signer = await t.makeUser({ roles: ['neurologist'], passwordHash: await hashPassword(GOOD), totpSecretSealed: 'sealed' })
    await makeSetUpLink(t.as(bothAdmin), signer.id, { resetSecondFactor: true })
    const token = tokenOf(await makeSetUpLink(t.as(director), signer.id, { resetSecondFactor: true }))
    await expect(setPassword(t.context, { token, password: 'nine chars' })).rejects.toMatchObject({ code: 'not-valid' })
    await setPassword(t.context, { token, password: 'other green lanterns' })
    expect(await t.db.selectFrom('user').select(['totpEnabledAt', 'totpSecretSealed']).where('id', '=', signer.id).executeTakeFirst()).toEqual({ totpEnabledAt: null, totpSecretSealed: null })
  })
  it('is not made by a medical director alone for anybody else', async () => {
    const user = await t.makeUser({ roles: ['technologist'] })
    await expect(makeSetUpLink(t.as(director), user.id, { resetSecondFactor: false })).rejects.toMatchObject({ code: 'not-allowed' })
  })
})

describe('the own password', () => {
  it('changes with the present one, renews the session and ends the others', async () => {
    const user = await t.makeUser({ roles: ['technologist'], passwordHash: await hashPassword(GOOD) })
    const open = () => t.db.transaction().execute(trx => createSession(t.context, trx, { userId: user.id, secondFactor: true, agent: '' }))
    const [mine] = [await open(), await open()]
    const change = { userId: user.id, currentPassword: GOOD, newPassword: 'rain on tin roofs', endOtherSessions: true, sessionHash: t.keys.tokenHash(mine), agent: '' }
    await expect(changePassword(t.as(user), { ...change, currentPassword: 'wrong' })).rejects.toMatchObject({ code: 'wrong-password' })
    await expect(changePassword(t.as(user), { ...change, newPassword: '12345678' })).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ path: 'newPassword' }] } })
    const renewed = await changePassword(t.as(user), change)
    const left = await t.db.selectFrom('session').select(['idHash', 'secondFactor']).where('userId', '=', user.id).where('endedAt', 'is', null).execute()
    expect(left).toEqual([{ idHash: t.keys.tokenHash(renewed), secondFactor: 1 }])
    expect(renewed).not.toBe(mine)
  })
  it('may be guessed ten times by whoever sits at an open session, then not for a quarter of an hour', async () => {
    const user = await t.makeUser({ passwordHash: await hashPassword(GOOD) })
    for (let n = 0; n < 10; n++) expect(await verifyOwnPassword(t.context, user.id, 'wrong')).toBe(false)
    await expect(verifyOwnPassword(t.context, user.id, GOOD)).rejects.toMatchObject({ code: 'too-many-requests' })
  })
})

describe('sites', () => {
  const input = siteSchema.parse({ name: 'West Clinic', town: 'Town', timeZone: 'Europe/Lisbon', rooms: ['Room 1'] })
  it('have their own name and a known time zone; whoever adds one administers it', async () => {
    const site = await addSite(t.as(bothAdmin), input)
    await expect(addSite(t.as(bothAdmin), input)).rejects.toMatchObject({ options: { fields: [{ path: 'name' }] } })
    await expect(changeSite(t.as(bothAdmin), site.id, { timeZone: 'Europe/Nowhere' })).rejects.toMatchObject({ options: { fields: [{ path: 'timeZone' }] } })
    expect(await changeSite(t.as(bothAdmin), site.id, { rooms: ['Room 1', 'Room 2'] })).toMatchObject({ rooms: ['Room 1', 'Room 2'], town: 'Town', timeZone: 'Europe/Lisbon' })
    expect((await viewPerson(t.as(bothAdmin), [site.id], bothAdmin.id)).holdings).toMatchObject([{ siteId: site.id, role: 'administrator' }])
    const event = await t.db.selectFrom('auditEvent').select('dataJson').where('name', '=', 'site.changed').where('subjectId', '=', site.id).executeTakeFirstOrThrow()
    expect(JSON.parse(event.dataJson)).toEqual({ changes: [{ field: 'rooms', before: ['Room 1'], after: ['Room 1', 'Room 2'] }] })
  })
})

describe('the ledger', () => {
  it('shows acts at the own sites and those of no site, never those of another site', async () => {
    await changeSite(t.as(bothAdmin), north.id, { town: 'Northern Town' })
    await changeSite(t.as(bothAdmin), south.id, { town: 'Southern Town' })
    const rows = async (query: object) => (await listLedger(t.db, [north.id], ledgerQuerySchema.parse(query))).rows
    const changed = await rows({ name: 'site.changed' })
    expect(changed).toMatchObject([{ subjectId: north.id, siteName: 'North Clinic', actor: bothAdmin.name, sentence: 'changed a site: town' }])
    expect((await rows({ name: 'person.added' })).length).toBeGreaterThan(0)
    expect((await rows({ actor: director.id })).every(row => row.actor === director.name)).toBe(true)
  })
})

describe('the first run', () => {
  const first = { organisationName: 'Invented Clinics', siteName: 'First Site', town: 'Town', timeZone: 'Europe/Prague', name: 'First Administrator', email: 'First@clinic.example', password: GOOD }
  it('makes one administrator through one link, and none once somebody exists', async () => {
    const fresh = await testContext()
    const older = (await writeFirstRunLink(fresh.context))!.split('#')[1]!
    const token = (await writeFirstRunLink(fresh.context))!.split('#')[1]!
    expect(JSON.stringify(await fresh.db.selectFrom('oneTimeLink').selectAll().execute())).not.toContain(token)
    await expect(makeFirstAdministrator(fresh.context, { ...first, token: older })).rejects.toMatchObject({ code: 'link-used' })
    await expect(makeFirstAdministrator(fresh.context, { ...first, token, password: 'First Administrator' })).rejects.toMatchObject({ code: 'not-valid' })
    const results = await Promise.allSettled([1, 2].map(() => makeFirstAdministrator(fresh.context, { ...first, token })))
    expect(results.map(result => result.status).sort()).toEqual(['fulfilled', 'rejected'])
    expect(await fresh.db.selectFrom('user').select('email').execute()).toEqual([{ email: 'first@clinic.example' }])
    expect(await fresh.db.selectFrom('roleHolding').select('role').execute()).toEqual([{ role: 'administrator' }])
    expect(await writeFirstRunLink(fresh.context)).toBeNull()
  })
  it('is not offered in the demonstration', async () => {
    expect(await writeFirstRunLink((await testContext({ demonstration: true })).context)).toBeNull()
  })
})

describe('a stored password', () => {
  it('is argon2id, salted, and right for the same text however it was composed', async () => {
    const hash = await hashPassword('sieben grüne Lampen')
    expect(hash).toMatch(/^\$argon2id\$v=19\$m=19456,p=1,t=2\$/)
    expect(await verifyPassword(hash, 'sieben gru\u0308ne Lampen')).toBe(true)
    expect(await verifyPassword(hash, 'sieben grune Lampen')).toBe(false)
    expect(await hashPassword('sieben grüne Lampen')).not.toBe(hash)
  })
  it('that does not exist matches nothing, not even the text of the stand-in', async () => {
    expect(await verifyPassword(null, 'nobody has this password')).toBe(false)
  })
})
