import { randomUUID } from 'node:crypto'
import { sql } from 'kysely'
import { beforeAll, describe, expect, it } from 'vitest'
import { listReferrals, referralSorts, type ReferralListQuery } from '#server/database/queries/referral-list'
import { urgencies } from '#shared/schemas/referral'
import { referralStates } from '#shared/states'
import { cancelReferral } from '#server/services/move-referral'
import { policies } from '#shared/policies/index'
import { dueOf } from '#shared/referral-clocks'
import { clinic } from './bench-helpers'
import { testContext } from './helpers'

const t = await testContext()
const c = await clinic(t)
const list = (changes: Partial<ReferralListQuery> = {}) => listReferrals(t.db, { siteIds: [c.site.id], states: [], search: '', sort: 'stateSince', direction: 'asc', page: 1, pageSize: 50, clocks: policies.clocks.initial, now: new Date('2026-12-02T09:00:00Z'), ...changes })

describe('a small list', () => {
  it('filters, counts, sorts and says what to do next', async () => {
    const anna = await t.makePatient({ familyName: 'Aaronson', givenName: 'Anna' })
    const draft = await c.draft({ examination: '' })
    t.clock.minutes(1)
    const ready = await c.accepted({ patientId: anna.id, urgency: 'urgent', urgencyReason: 'weak hand' })
    t.clock.minutes(1)
    const gone = await c.draft()
    await cancelReferral(c.admin, { id: gone, reason: 'no longer wanted' })
    const all = await list()
    expect(all.rows.map(row => [row.id, row.nextStep])).toEqual([[draft, 'Complete the examination'], [ready, 'Book'], [gone, '']])
    expect(all).toMatchObject({ total: 3, counts: { draft: 1, accepted: 1, cancelled: 1, received: 0 } })
    expect((await list({ states: ['accepted'] })).rows).toMatchObject([{ id: ready, patientName: 'Aaronson, Anna', urgency: 'urgent', studyId: null, bookingStartsAt: null }])
    expect(await list({ urgency: 'urgent' })).toMatchObject({ total: 1, counts: { draft: 0, accepted: 1 } })
    expect((await list({ sort: 'patient' })).rows[0]!.id).toBe(ready)
    expect((await list({ sort: 'urgency', direction: 'desc' })).rows.map(row => row.id)).toEqual([ready, draft, gone].toSorted((a, b) => Number(b === ready) - Number(a === ready)))
    expect((await list({ search: 'aarons' })).rows.map(row => row.id)).toEqual([ready])
    expect(await list({ search: 'ref-2026-000001' })).toMatchObject({ total: 1 })
    expect(await list({ search: 'aarons', states: ['draft'] })).toMatchObject({ total: 0, counts: { accepted: 1 } })
  })
})

/** Many referrals, written straight into the tables: what is measured is reading. */
describe('a long list', () => {
  const MANY = 12_000
  const siteIds: string[] = []
  beforeAll(async () => {
    siteIds.push((await t.makeSite()).id, (await t.makeSite()).id)
    const [createdBy, patients] = [c.technologistUser.id, await Promise.all(Array.from({ length: 50 }, () => t.makePatient()))]
    const rows = Array.from({ length: MANY }, (_, n) => ({ id: randomUUID(), number: `REF-2020-${String(n).padStart(6, '0')}`, patientId: patients[n % 50]!.id, siteId: siteIds[n % 2]!, physicianId: null, state: referralStates[(n * 7) % referralStates.length]!, stateSince: new Date(Date.UTC(2020, 0, 1) + ((n * 7919) % MANY) * 60_000).toISOString(), urgency: urgencies[n % 3]!, side: 'right' as const, protocol: null, receivedAt: null, createdAt: '2020-01-01T00:00:00.000Z', createdBy }))
    await t.db.transaction().execute(async (trx) => {
      for (let n = 0; n < MANY; n += 500) await trx.insertInto('referral').values(rows.slice(n, n + 500)).execute()
    })
  })
  const plain = async (order: string, offset: number) => (await sql<{ id: string }>`SELECT referral.id FROM referral JOIN patient ON patient.id = referral.patient_id JOIN site ON site.id = referral.site_id WHERE referral.site_id IN (${siteIds[0]}, ${siteIds[1]}) ORDER BY ${sql.raw(order)} LIMIT 20 OFFSET ${sql.lit(offset)}`.execute(t.db)).rows.map(row => row.id)
  it.each([
    { sort: 'stateSince', direction: 'asc', order: 'state_since, referral.id' },
    { sort: 'stateSince', direction: 'desc', order: 'state_since DESC, referral.id DESC' },
    { sort: 'urgency', direction: 'desc', order: `CASE urgency WHEN 'routine' THEN 1 WHEN 'urgent' THEN 2 ELSE 3 END DESC, state_since, referral.id` },
    { sort: 'number', direction: 'desc', order: 'number DESC' },
    { sort: 'patient', direction: 'asc', order: 'family_name, given_name, number' },
  ] as const)('$sort $direction is the same as sorting everything', async ({ sort, direction, order }) => {
    for (const page of [1, 7]) {
      const found = await list({ siteIds, sort, direction, page, pageSize: 20 })
      expect(found.rows.map(row => row.id)).toEqual(await plain(order, (page - 1) * 20))
      expect(found.total).toBe(MANY)
    }
  })
  it.each(referralSorts)('sorted by %s, it is whole: no row twice, none left out', async (sort) => {
    const seen = new Set<string>()
    for (const page of [1, 2, 3]) for (const row of (await list({ siteIds: [siteIds[0]!], states: ['answered', 'booked'], sort, page, pageSize: 200 })).rows) seen.add(row.id)
    expect(seen.size).toBe(600)
  })
  it('past their clock: the same as asking each by itself', async () => {
    const now = new Date('2020-01-06T00:00:00Z')
    const rows = await t.db.selectFrom('referral').select(['id', 'state', 'urgency', 'stateSince']).where('siteId', 'in', siteIds).execute()
    const late = rows.filter((row) => {
      const due = dueOf(row, policies.clocks.initial)
      return due !== null && due < now.toISOString()
    })
    expect(late.length).toBeGreaterThan(100)
    expect(late.length).toBeLessThan(rows.length / 2)
    const found = await list({ siteIds, overdue: true, now, pageSize: 200 })
    expect([found.total, found.overdue]).toEqual([late.length, late.length])
    expect(found.rows.every(row => late.some(one => one.id === row.id))).toBe(true)
    const urgentReceived = late.filter(row => row.state === 'received' && row.urgency === 'urgent').length
    expect((await list({ siteIds, overdue: true, now, states: ['received'], urgency: 'urgent' })).total).toBe(urgentReceived)
    expect((await list({ siteIds, overdue: true, now, states: ['answered'] })).total).toBe(0)
  })
  it('those of one person', async () => {
    const owner = await t.makeUser()
    const some = await t.db.selectFrom('referral').select('id').where('siteId', '=', siteIds[0]!).where('state', '=', 'received').limit(7).execute()
    await t.db.updateTable('referral').set({ ownerId: owner.id }).where('id', 'in', some.map(row => row.id)).execute()
    const found = await list({ siteIds, ownerId: owner.id })
    expect(found.rows.map(row => [row.id, row.ownerName]).toSorted()).toEqual(some.map(row => [row.id, owner.name]).toSorted())
    expect((await list({ siteIds: [siteIds[1]!], ownerId: owner.id })).total).toBe(0)
  })
  it('counts follow every change', async () => {
    const counts = async () => (await list({ siteIds })).counts
    const before = await counts()
    const one = await t.db.selectFrom('referral').select('id').where('siteId', 'in', siteIds).where('state', '=', 'draft').executeTakeFirstOrThrow()
    await cancelReferral(t.as(await t.makeUser({ roles: ['administrator'] })), { id: one.id, reason: 'no longer wanted' })
    const after = await counts()
    expect([after.draft, after.cancelled]).toEqual([before.draft - 1, before.cancelled + 1])
    const real = await t.db.selectFrom('referral').select(['state']).select(eb => eb.fn.countAll<number>().as('n')).where('siteId', 'in', siteIds).groupBy('state').execute()
    expect(Object.fromEntries(real.map(row => [row.state, row.n]))).toEqual(after)
  })
  it('reads a page of the waiting list from the index: no sorting, no walk through the table', async () => {
    const plan = await sql<{ detail: string }>`EXPLAIN QUERY PLAN SELECT id, state_since AS since FROM referral WHERE site_id = ${siteIds[0]} AND state = 'draft' AND urgency = 'routine' UNION ALL SELECT id, state_since AS since FROM referral WHERE site_id = ${siteIds[1]} AND state = 'draft' AND urgency = 'routine' ORDER BY since, id LIMIT 50`.execute(t.db)
    const details = plan.rows.map(row => row.detail)
    expect(details.filter(detail => detail.includes('TEMP B-TREE'))).toEqual([])
    expect(details.filter(detail => detail.includes('COVERING INDEX referral_list'))).toHaveLength(2)
  })
})
