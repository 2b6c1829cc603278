import { describe, expect, it } from 'vitest'
import { recipientsOfReferral } from '#server/database/queries/recipients'
import { addPhysician, changePhysician } from '#server/services/change-physician'
import { addPractice, changePractice, noteHandedOver, renewPassphrase } from '#server/services/change-practice'
import { changePerson } from '#server/services/change-person'
import { closePractice, reopenPractice } from '#server/services/close-practice'
import { giveDeskAccess } from '#server/services/desk-access'
import { mergePhysicians } from '#server/services/merge-physicians'
import { addDelegate, endDelegate } from '#server/services/practice-delegates'
import { makeSetUpLink } from '#server/services/set-up-link'
import { searchPhysicians } from '#server/database/queries/directory'
import { verifyOtherwise } from '#server/services/verify-address'
import { listPractices, viewPractice } from '#server/services/view-directory'
import { practiceSchema } from '#shared/schemas/directory'
import { testContext } from './helpers'

/** Whoever may write in the directory must not redirect the reports of a clinic that is not theirs. */
const t = await testContext()
const [north, south] = [await t.makeSite({ name: 'North Clinic' }), await t.makeSite({ name: 'South Clinic' })]
const northAdmin = t.as(await t.makeUser({ roles: [{ siteId: north.id, role: 'administrator' }] }))
const southAdmin = t.as(await t.makeUser({ roles: [{ siteId: south.id, role: 'administrator' }] }))
const TODAY = '2026-12-02'

async function entry(sites: { id: string }[] = []) {
  const physician = await t.makePhysician()
  const referrals = []
  for (const site of sites) referrals.push(await t.makeReferral({ siteId: site.id, physicianId: physician.id }))
  return { ...physician, referrals }
}
const tasks = async (siteId: string, kind: string, subjectIds: string[]) => (await t.db.selectFrom('task').select('sentence').where('siteId', '=', siteId).where('kind', '=', kind).where('subjectId', 'in', subjectIds).execute()).length

const acts: [string, (context: typeof northAdmin, made: Awaited<ReturnType<typeof entry>>) => Promise<unknown>][] = [
  ['changes the address', (context, made) => changePhysician(context, made.id, { email: `other${Math.random()}@elsewhere.example` })],
  ['says that the physician left', (context, made) => changePhysician(context, made.id, { leftOn: TODAY })],
  ['replaces the passphrase', (context, made) => renewPassphrase(context, made.practiceId)],
  ['notes a hand-over', (context, made) => noteHandedOver(context, made.practiceId, { by: 'letter', on: TODAY })],
  ['changes how reports go', (context, made) => changePractice(context, made.practiceId, { deliveryMethod: 'collection-link' })],
  ['verifies the address another way', (context, made) => verifyOtherwise(context, made.id, 'Said so by telephone.')],
  ['names who may collect', (context, made) => addDelegate(context, made.practiceId, { name: 'A. Stranger', duty: '', phone: '' })],
  ['closes the practice', (context, made) => closePractice(context, made.practiceId, 'Closed for a test')],
  ['opens the desk to an account', (context, made) => giveDeskAccess(context, { physicianId: made.id, siteId: context.actor.holdings[0]!.siteId })],
  ['merges the entry', async (context, made) => mergePhysicians(context, { id: made.id, into: (await entry()).id })],
]

describe('the administrator of a site that does not use a practice', () => {
  it.each(acts)('is refused who %s', async (_name, act) => {
    const made = await entry([south])
    const before = await t.db.selectFrom('physician').selectAll().where('id', '=', made.id).executeTakeFirst()
    await expect(act(northAdmin, made)).rejects.toMatchObject({ code: 'not-allowed', options: { message: expect.stringContaining('South Clinic') } })
    expect(await t.db.selectFrom('physician').selectAll().where('id', '=', made.id).executeTakeFirst()).toEqual(before)
  })
  it.each(acts)('of one that uses it among others %s, and the others are told', async (_name, act) => {
    const made = await entry([north, south])
    await act(northAdmin, made)
    expect([await tasks(south.id, 'directory-changed', [made.practiceId]), await tasks(north.id, 'directory-changed', [made.practiceId])]).toEqual([1, 0])
  })
  it('writes freely where nobody uses it yet', async () => {
    const { id } = await addPractice(northAdmin, practiceSchema.parse({ name: 'Fresh Practice', town: 'Town' }))
    const physician = await addPhysician(northAdmin, { practiceId: id, name: 'Dr Fresh', title: '', email: 'fresh@practice.example', phone: '' })
    await changePhysician(northAdmin, physician.id, { email: 'fresher@practice.example' })
    expect(await viewPractice(southAdmin, id)).toMatchObject({ usedBy: [], mayChange: true })
  })
})

it('what was changed stands in the trail with old and new value', async () => {
  const made = await entry([north])
  await changePhysician(northAdmin, made.id, { email: 'after@practice.example' })
  const event = await t.db.selectFrom('auditEvent').select('dataJson').where('name', '=', 'physician.changed').where('subjectId', '=', made.id).executeTakeFirstOrThrow()
  expect(JSON.parse(event.dataJson)).toEqual({ changes: [{ field: 'email', before: made.email, after: 'after@practice.example' }] })
})

it('an account for the desk is cut off when the address changes, its sessions too', async () => {
  const made = await entry([north])
  const { userId } = await giveDeskAccess(northAdmin, { physicianId: made.id, siteId: north.id })
  await t.db.insertInto('session').values({ idHash: `h${userId}`, userId, createdAt: TODAY, lastUsedAt: TODAY, expiresAt: '2027-01-01', secondFactor: 0, agent: '', endedAt: null, endedBecause: null }).execute()
  await changePhysician(northAdmin, made.id, { email: 'successor@practice.example' })
  expect(await t.db.selectFrom('physician').select('userId').where('id', '=', made.id).executeTakeFirst()).toEqual({ userId: null })
  expect(await t.db.selectFrom('session').select('endedBecause').where('userId', '=', userId).execute()).toEqual([{ endedBecause: 'access to the desk ended' }])
  expect(await t.db.selectFrom('roleHolding').select('endsOn').where('userId', '=', userId).execute()).toEqual([{ endsOn: TODAY }])
})

describe('whoever left, and a practice that closed', () => {
  it('what is under way becomes a task at its own site, with the day', async () => {
    const made = await entry([north, south])
    const answered = await t.makeReferral({ siteId: north.id, physicianId: made.id, state: 'answered' })
    await changePhysician(northAdmin, made.id, { leftOn: '2026-12-10' })
    const open = await t.db.selectFrom('task').select(['siteId', 'subjectId', 'dueAt']).where('kind', '=', 'referrer-left').where('subjectId', 'in', [...made.referrals.map(referral => referral.id), answered.id]).orderBy('siteId').execute()
    expect(open).toHaveLength(2)
    expect(new Set(open.map(task => task.siteId))).toEqual(new Set([north.id, south.id]))
    expect(open.every(task => task.dueAt === '2026-12-10T00:00:00.000Z')).toBe(true)
  })
  it('nothing is sent to a closed practice, and it opens again', async () => {
    const made = await entry([north])
    const because = async () => (await recipientsOfReferral(t.db, made.referrals[0]!.id, TODAY))[0]!.because
    expect(await because()).toBe('')
    await closePractice(northAdmin, made.practiceId, 'The physician retired')
    expect(await because()).toBe('the physician left the practice')
    expect(await tasks(north.id, 'referrer-left', [made.referrals[0]!.id])).toBe(1)
    await expect(closePractice(northAdmin, made.practiceId, 'again')).rejects.toMatchObject({ code: 'wrong-state' })
    await reopenPractice(northAdmin, made.practiceId)
    expect(await because()).toBe('')
  })
})

describe('two entries that are one person', () => {
  it('are found by their name, whatever title and accents, and no more once they are one', async () => {
    const [one, two] = [await t.makePhysician({ name: 'Dr Zdeněk Twice' }), await t.makePhysician({ name: 'Twice, Zdenek' })]
    const found = async () => (await listPractices(northAdmin, { search: '', show: 'same-name', page: 1, pageSize: 100 })).rows.map(row => row.id)
    expect(await found()).toEqual(expect.arrayContaining([one.practiceId, two.practiceId]))
    await mergePhysicians(northAdmin, { id: two.id, into: one.id })
    const after = await found()
    expect([after.includes(one.practiceId), after.includes(two.practiceId)]).toEqual([false, false])
  })
  it('become one: what is under way moves, what was answered stays, and the old one is found no more', async () => {
    const [double, stays] = [await entry([north]), await entry()]
    const answered = await t.makeReferral({ siteId: north.id, physicianId: double.id, state: 'answered' })
    const copied = await t.makeReferral({ siteId: north.id, physicianId: stays.id })
    await t.db.insertInto('referralCopy').values({ referralId: copied.id, physicianId: double.id }).execute()
    await mergePhysicians(northAdmin, { id: double.id, into: stays.id })
    expect(await t.db.selectFrom('referral').select(['id', 'physicianId']).where('id', 'in', [double.referrals[0]!.id, answered.id]).orderBy('state').execute()).toEqual([{ id: answered.id, physicianId: double.id }, { id: double.referrals[0]!.id, physicianId: stays.id }])
    expect((await recipientsOfReferral(t.db, copied.id, TODAY)).map(recipient => recipient.physicianId)).toEqual([stays.id])
    expect((await recipientsOfReferral(t.db, answered.id, TODAY)).map(recipient => recipient.physicianId)).toEqual([stays.id])
    expect((await searchPhysicians(t.db, { search: double.name, page: 1, pageSize: 20, today: TODAY })).rows.map(row => row.id)).not.toContain(double.id)
  })
  it('and once more: what went to the first entry goes to the last', async () => {
    const [first, second, last] = [await entry(), await entry(), await entry()]
    const answered = await t.makeReferral({ siteId: north.id, physicianId: first.id, state: 'answered' })
    await mergePhysicians(northAdmin, { id: first.id, into: second.id })
    await mergePhysicians(northAdmin, { id: second.id, into: last.id })
    expect((await recipientsOfReferral(t.db, answered.id, TODAY)).map(recipient => recipient.physicianId)).toEqual([last.id])
  })
  it.each([
    ['the same entry', async (made: { id: string }) => made.id],
    ['one that left', async () => (await t.makePhysician({ leftOn: '2026-11-01' })).id],
    ['one that was merged', async () => (await t.makePhysician({ mergedInto: (await t.makePhysician()).id })).id],
  ])('not into %s', async (_name, other) => {
    const made = await entry([north])
    await expect(mergePhysicians(northAdmin, { id: made.id, into: await other(made) })).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ path: 'into' }] } })
  })
})

it('a delegate is named, stands with the practice, and is ended', async () => {
  const made = await entry([north])
  const { id } = await addDelegate(northAdmin, made.practiceId, { name: 'A. Clerk', duty: 'reception', phone: '+00 55 1' })
  expect((await viewPractice(northAdmin, made.practiceId)).delegates).toEqual([{ id, name: 'A. Clerk', duty: 'reception', phone: '+00 55 1' }])
  await endDelegate(northAdmin, id)
  expect((await viewPractice(northAdmin, made.practiceId)).delegates).toEqual([])
  await expect(endDelegate(northAdmin, id)).rejects.toMatchObject({ code: 'not-found' })
})

describe('the desk of a physician', () => {
  it('is not opened with a link that an administrator sees, where reports of other sites can be read with it', async () => {
    const made = await entry([north, south])
    const given = await giveDeskAccess(northAdmin, { physicianId: made.id, siteId: north.id, byMail: false })
    expect(given).toMatchObject({ link: null, mailedTo: made.email })
    expect(await makeSetUpLink(northAdmin, given.userId, { resetSecondFactor: false, byMail: false })).toMatchObject({ link: null, mailedTo: made.email })
  })
  it('nor by turning the address of its account elsewhere', async () => {
    const made = await entry([north])
    const { userId } = await giveDeskAccess(northAdmin, { physicianId: made.id, siteId: north.id })
    await expect(changePerson(northAdmin, userId, { email: 'mine@elsewhere.example' })).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ path: 'email' }] } })
  })
  it('nor through an account of one\'s own that was given the physician\'s address', async () => {
    const made = await entry([north])
    const own = await t.makeUser({ email: made.email, emailConfirmedAt: null, passwordHash: 'known', roles: [{ siteId: north.id, role: 'technologist' }] })
    await expect(giveDeskAccess(northAdmin, { physicianId: made.id, siteId: north.id })).rejects.toMatchObject({ code: 'not-valid', options: { message: expect.stringContaining('never confirmed') } })
    expect(await t.db.selectFrom('physician').select('userId').where('userId', '=', own.id).execute()).toEqual([])
  })
})
