import { describe, expect, it } from 'vitest'
import { approveAdoption, proposeAdoption } from '#server/services/adopt-set'
import { addPerson, changePerson } from '#server/services/change-person'
import { currentHoldings } from '#server/services/current-holdings'
import { hashPassword } from '#server/services/passwords'
import { decideRole, listRoleProposals } from '#server/services/role-proposals'
import { makeSetUpLink, setPassword } from '#server/services/set-up-link'
import { personSchema } from '#shared/schemas/user'
import { testContext, type MadeUser, type TestContext } from './helpers'

/** One administrator must not be able to be two people: not by a second account, not by somebody else's. */
const passwordHash = await hashPassword('seven green lanterns')
const DAY = 24 * 60
const rolesOf = async (t: TestContext, id: string) => (await currentHoldings(t.db, [id], t.context.clock())).map(holding => holding.role)
const newPerson = (siteId: string, role: string) => personSchema.parse({ email: `second${Math.random()}@clinic.example`, name: 'Second Self', holdings: [{ siteId, role }] })

async function clinic() {
  const t = await testContext()
  const site = await t.makeSite()
  const admin = await t.makeUser({ roles: ['administrator'], passwordHash })
  return { t, site, admin, propose: () => proposeAdoption(t.as(admin), { siteId: site.id, setId: 'aanem-ndtf-2016', setVersion: 1, techniques: null, effectiveOn: '2026-12-02' }) }
}

describe('a second account of one\'s own', () => {
  it('gets no role that approves while somebody else could consent', async () => {
    const { t, site, admin } = await clinic()
    const director = await t.makeUser({ roles: ['medical-director'], passwordHash })
    const id = await addPerson(t.as(admin), newPerson(site.id, 'medical-director'))
    expect(await rolesOf(t, id)).toEqual([])
    const [proposal] = await listRoleProposals(t.as(director))
    expect(proposal).toMatchObject({ userId: id, role: 'medical-director', siteId: site.id })
    await expect(decideRole(t.as(admin), { id: proposal!.id, approve: true })).rejects.toMatchObject({ code: 'not-allowed' })
    await decideRole(t.as(director), { id: proposal!.id, approve: true })
    expect(await rolesOf(t, id)).toEqual(['medical-director'])
    await expect(decideRole(t.as(director), { id: proposal!.id, approve: true })).rejects.toMatchObject({ code: 'wrong-state' })
  })
  it('does not consent to its own role, nor does the one who asks through it', async () => {
    const { t, site, admin } = await clinic()
    const other = await t.makeUser({ roles: ['administrator'], passwordHash })
    await changePerson(t.as(admin), other.id, { holdings: [{ siteId: site.id, role: 'administrator' }, { siteId: site.id, role: 'medical-director' }] })
    expect(await rolesOf(t, other.id)).toEqual(['administrator', 'medical-director'])
    const third = await t.makeUser({ roles: ['medical-director'], passwordHash })
    await changePerson(t.as(admin), third.id, { holdings: [{ siteId: site.id, role: 'medical-director' }, { siteId: site.id, role: 'administrator' }] })
    const [proposal] = await listRoleProposals(t.as(other))
    await expect(decideRole(t.as(third), { id: proposal!.id, approve: true })).rejects.toMatchObject({ code: 'not-allowed' })
    expect(await rolesOf(t, third.id)).toEqual(['medical-director'])
  })
  it('nobody gives the own account another role alone while somebody else could', async () => {
    const { t, site, admin } = await clinic()
    await t.makeUser({ roles: ['medical-director'], passwordHash })
    await changePerson(t.as(admin), admin.id, { holdings: [{ siteId: site.id, role: 'administrator' }, { siteId: site.id, role: 'neurologist' }] })
    expect(await rolesOf(t, admin.id)).toEqual(['administrator'])
  })
  it('the first of all is named by one person alone, and it is told', async () => {
    const { t, site, admin } = await clinic()
    const id = await addPerson(t.as(admin), newPerson(site.id, 'medical-director'))
    expect(await rolesOf(t, id)).toEqual(['medical-director'])
    const neurologist = await t.makeUser({ roles: ['neurologist'], passwordHash })
    await changePerson(t.as(admin), id, { holdings: [] })
    const again = await addPerson(t.as(admin), newPerson(site.id, 'medical-director'))
    expect(await rolesOf(t, again)).toEqual(['medical-director'])
    expect(await t.db.selectFrom('outboxMail').select('template').where('toAddress', '=', neurologist.email).execute()).toEqual([{ template: 'account-notice' }])
  })
  it('is not had by ending the others first: then seven days pass, and they are told by mail at once', async () => {
    const { t, site, admin } = await clinic()
    const director = await t.makeUser({ roles: ['medical-director'], passwordHash })
    await changePerson(t.as(admin), director.id, { holdings: [] })
    const id = await addPerson(t.as(admin), newPerson(site.id, 'medical-director'))
    expect(await rolesOf(t, id)).toEqual([])
    expect(await t.db.selectFrom('outboxMail').select('id').where('toAddress', '=', director.email).where('template', '=', 'account-notice').execute()).not.toEqual([])
    const [proposal] = await listRoleProposals(t.as(admin))
    await expect(decideRole(t.as(admin), { id: proposal!.id, approve: true })).rejects.toMatchObject({ code: 'not-allowed' })
    t.clock.minutes(7 * DAY)
    await decideRole(t.as(admin), { id: proposal!.id, approve: true })
    expect(await rolesOf(t, id)).toEqual(['medical-director'])
    expect(await t.db.selectFrom('roleProposal').select('outcome').execute()).toEqual([{ outcome: 'approved-alone' }])
  })
})

describe('the second of two people', () => {
  const cases: [string, (admin: MadeUser) => object, string][] = [
    ['has an address that no mail proved', () => ({ emailConfirmedAt: null }), 'address'],
    ['has no second factor', () => ({ totpEnabledAt: null }), 'second factor'],
    ['reads the same mailbox as the first', admin => ({ email: admin.email.replace('@', '+two@') }), 'mailbox'],
  ]
  it.each(cases)('who %s does not count', async (_name, changes, word) => {
    const { t, site, admin, propose } = await clinic()
    const director = await t.makeUser({ roles: [{ siteId: site.id, role: 'medical-director' }], ...changes(admin) })
    const { id } = await propose()
    await expect(approveAdoption(t.as(director), { id })).rejects.toMatchObject({ code: 'not-allowed', options: { message: expect.stringContaining(word) } })
    const real = await t.makeUser({ roles: ['medical-director'] })
    await approveAdoption(t.as(real), { id })
  })
})

describe('somebody else\'s account', () => {
  it('of an administrator is not opened by another one alone', async () => {
    const { t, admin } = await clinic()
    const other = await t.makeUser({ roles: ['administrator'], passwordHash })
    const director = await t.makeUser({ roles: ['medical-director'], passwordHash })
    expect(await makeSetUpLink(t.as(admin), other.id, { resetSecondFactor: true })).toEqual({ waiting: true })
    expect(await makeSetUpLink(t.as(director), other.id, { resetSecondFactor: true })).toMatchObject({ waiting: false, link: expect.any(String) })
  })
  it('is not opened by a link that was made before it became an administrator\'s', async () => {
    const { t, site, admin } = await clinic()
    const director = await t.makeUser({ roles: ['medical-director'], passwordHash })
    const other = await t.makeUser({ roles: ['technologist'], passwordHash, totpEnabledAt: null })
    const answer = await makeSetUpLink(t.as(admin), other.id, { resetSecondFactor: false })
    await changePerson(t.as(admin), other.id, { holdings: [{ siteId: site.id, role: 'administrator' }] })
    await decideRole(t.as(director), { id: (await listRoleProposals(t.as(director)))[0]!.id, approve: true })
    await expect(setPassword(t.context, { token: (answer as { link: string }).link.split('#')[1]!, password: 'taken over lanterns' })).rejects.toMatchObject({ code: 'link-used' })
    expect(await t.db.selectFrom('user').select('passwordHash').where('id', '=', other.id).executeTakeFirst()).toEqual({ passwordHash })
  })
  it('that approves for some days does not do so for longer at one person\'s word', async () => {
    const { t, site, admin } = await clinic()
    await t.makeUser({ roles: ['medical-director'], passwordHash })
    const other = await t.makeUser({ passwordHash })
    await t.db.insertInto('roleHolding').values({ id: 'days', userId: other.id, siteId: site.id, role: 'administrator', startsOn: '2026-12-01', endsOn: '2026-12-10', grantedBy: null, createdAt: '2026-12-01T00:00:00.000Z' }).execute()
    await expect(changePerson(t.as(admin), other.id, { holdings: [{ siteId: site.id, role: 'administrator', endsOn: null }] })).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ path: 'holdings' }] } })
    await changePerson(t.as(admin), other.id, { holdings: [{ siteId: site.id, role: 'administrator', endsOn: '2026-12-08' }] })
  })
  it('with only two administrators the link goes to the mailbox and is not shown', async () => {
    const { t, admin } = await clinic()
    const other = await t.makeUser({ roles: ['administrator'], passwordHash })
    expect(await makeSetUpLink(t.as(admin), other.id, { resetSecondFactor: true })).toMatchObject({ waiting: false, link: null, mailedTo: other.email })
  })
  it('that signs or approves keeps its address until its owner changes it', async () => {
    const { t, admin } = await clinic()
    for (const role of ['administrator', 'medical-director', 'neurologist'] as const) {
      const other = await t.makeUser({ roles: [role], passwordHash })
      await expect(changePerson(t.as(admin), other.id, { email: 'mine@clinic.example' })).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ path: 'email' }] } })
    }
  })
  it('the second asker for a signer\'s link stands up to the same questions', async () => {
    const { t, admin } = await clinic()
    const signer = await t.makeUser({ roles: ['neurologist'], passwordHash })
    const fake = await t.makeUser({ roles: ['administrator'], emailConfirmedAt: null })
    await makeSetUpLink(t.as(admin), signer.id, { resetSecondFactor: false })
    await expect(makeSetUpLink(t.as(fake), signer.id, { resetSecondFactor: false })).rejects.toMatchObject({ code: 'not-allowed' })
  })
  it('an address that was changed is not confirmed any more', async () => {
    const { t, admin } = await clinic()
    const technologist = await t.makeUser({ roles: ['technologist'], passwordHash })
    await changePerson(t.as(admin), technologist.id, { email: 'new@clinic.example' })
    expect(await t.db.selectFrom('user').select('emailConfirmedAt').where('id', '=', technologist.id).executeTakeFirst()).toEqual({ emailConfirmedAt: null })
  })
  it('a link that was shown proves no address, one that was mailed does', async () => {
    const { t, admin } = await clinic()
    const confirmed = async (id: string) => (await t.db.selectFrom('user').select('emailConfirmedAt').where('id', '=', id).executeTakeFirstOrThrow()).emailConfirmedAt
    const shown = await t.makeUser({ roles: ['technologist'], emailConfirmedAt: null, totpEnabledAt: null })
    const answer = await makeSetUpLink(t.as(admin), shown.id, { resetSecondFactor: false })
    await setPassword(t.context, { token: (answer as { link: string }).link.split('#')[1]!, password: 'seven green lanterns' })
    expect(await confirmed(shown.id)).toBeNull()
  })
})
