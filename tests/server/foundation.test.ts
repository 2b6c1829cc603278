import { describe, expect, it } from 'vitest'
import { recordAuditEvent } from '#server/services/record-audit-event'
import { moveState } from '#server/services/move-state'
import { nextNumber } from '#server/services/next-number'
import { testContext } from './helpers'

const t = await testContext()

describe('numbers', () => {
  it('run per series and per year, patients for ever, and a rolled-back act leaves no gap', async () => {
    const take = (thing: 'study' | 'patient' | 'report', year: number) => t.db.transaction().execute(trx => nextNumber(trx, thing, year))
    expect(await take('study', 2026)).toBe('NCS-2026-000001')
    await expect(t.db.transaction().execute(async (trx) => {
      await nextNumber(trx, 'study', 2026)
      throw new Error('stop')
    })).rejects.toThrow('stop')
    expect(await take('study', 2026)).toBe('NCS-2026-000002')
    expect(await take('study', 2027)).toBe('NCS-2027-000001')
    expect(await take('patient', 2026)).toBe('P-000001')
    expect(await take('patient', 2027)).toBe('P-000002')
    expect(await take('report', 2026)).toBe('REP-2026-000001')
  })
})

describe('moves', () => {
  it('lets one of two simultaneous moves win, and writes one change', async () => {
    const referral = await t.makeReferral({ state: 'received' })
    const user = await t.makeUser({ roles: ['neurologist'] })
    const move = (to: 'accepted' | 'declined') => t.db.transaction().execute(trx => moveState(t.as(user), trx, { subject: 'referral', id: referral.id, from: 'received', to, reason: 'because' }))
    const results = await Promise.allSettled([move('accepted'), move('declined')])
    expect(results.map(result => result.status).sort()).toEqual(['fulfilled', 'rejected'])
    expect(results.find(result => result.status === 'rejected')).toMatchObject({ reason: { code: 'wrong-state' } })
    const changes = await t.db.selectFrom('stateChange').selectAll().where('subjectId', '=', referral.id).execute()
    expect(changes).toMatchObject([{ subject: 'referral', fromState: 'received', toState: 'accepted', byUserId: user.id, reason: 'because' }])
  })
  it('refuses a move that shared/states.ts does not have', async () => {
    const referral = await t.makeReferral({ state: 'declined' })
    await expect(t.db.transaction().execute(trx => moveState(t.context, trx, { subject: 'referral', id: referral.id, from: 'declined', to: 'accepted' }))).rejects.toThrow('No referral goes from declined to accepted.')
  })
  it('says not-found for a thing that does not exist', async () => {
    await expect(t.db.transaction().execute(trx => moveState(t.context, trx, { subject: 'study', id: 'none', from: 'recording', to: 'handed-over' }))).rejects.toMatchObject({ code: 'not-found' })
  })
})

describe('audit events', () => {
  it('are undone with the act they belong to', async () => {
    const count = async () => (await t.db.selectFrom('auditEvent').select(eb => eb.fn.countAll<number>().as('n')).executeTakeFirstOrThrow()).n
    const before = await count()
    await expect(t.db.transaction().execute(async (trx) => {
      await recordAuditEvent(t.context, trx, { name: 'site.added', subject: 'site', subjectId: 'x', data: {} })
      throw new Error('stop')
    })).rejects.toThrow('stop')
    expect(await count()).toBe(before)
  })
})
