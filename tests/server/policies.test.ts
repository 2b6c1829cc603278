import { describe, expect, it } from 'vitest'
import { policyInForce } from '#server/database/queries/policies'
import { approvePolicy, proposePolicy, withdrawPolicy } from '#server/services/policies'
import { clocks } from '#shared/policies/clocks'
import { policies, policyNames } from '#shared/policies/index'
import { clinic } from './bench-helpers'
import { testContext } from './helpers'

const t = await testContext()
const c = await clinic(t)
const secondDirector = t.as(await t.makeUser({ roles: ['medical-director'] }))
const body = (urgent: number) => ({ ...clocks.initial, sign: { ...clocks.initial.sign, urgent } })
const proposal = (changes: object = {}) => ({ name: 'clocks' as const, siteId: null, body: body(12), note: 'Urgent studies sooner', effectiveOn: '2026-12-04', ...changes })
const urgentHours = async (day: string) => (await policyInForce(t.db, 'clocks', null, day)).body.sign.urgent

it.each(policyNames)('%s: what the program comes with fits its own schema', (name) => {
  expect(policies[name].schema.safeParse(policies[name].initial).success).toBe(true)
})

describe('a policy', () => {
  it('holds only after another person approved it, from its first day on', async () => {
    const { id, version } = await proposePolicy(c.director, proposal())
    expect(version).toBe(1)
    expect(await urgentHours('2026-12-09')).toBe(24)
    await expect(approvePolicy(c.director, { id })).rejects.toMatchObject({ code: 'not-allowed' })
    await approvePolicy(secondDirector, { id })
    await expect(approvePolicy(secondDirector, { id })).rejects.toMatchObject({ code: 'wrong-state' })
    expect(await urgentHours('2026-12-03')).toBe(24)
    expect(await urgentHours('2026-12-04')).toBe(12)
  })
  it('approved late starts on the day of approval', async () => {
    const { id } = await proposePolicy(c.neurologist, proposal({ body: body(6), effectiveOn: '2026-12-05' }))
    t.clock.set('2026-12-08T09:00:00.000Z')
    await approvePolicy(c.director, { id })
    expect(await urgentHours('2026-12-07')).toBe(12)
    expect(await urgentHours('2026-12-08')).toBe(6)
    t.clock.set('2026-12-02T09:00:00.000Z')
  })
  it('approved is never altered, not even by hand', async () => {
    await expect(t.db.updateTable('policyVersion').set({ bodyJson: '{}' }).where('approvedAt', 'is not', null).execute()).rejects.toThrow('never altered')
    await expect(t.db.deleteFrom('policyVersion').execute()).rejects.toThrow('never removed')
  })
  it('is taken back by the person who proposed it or refused by a director, and by nobody else', async () => {
    const { id } = await proposePolicy(c.neurologist, proposal())
    const other = t.as(await t.makeUser({ roles: ['administrator'] }))
    await expect(withdrawPolicy(other, { id })).rejects.toMatchObject({ code: 'not-allowed' })
    await withdrawPolicy(c.neurologist, { id })
    await expect(approvePolicy(c.director, { id })).rejects.toMatchObject({ code: 'wrong-state' })
  })
  it.each([
    { what: 'an hour of zero', change: { body: body(0) }, path: 'body.sign.urgent' },
    { what: 'a missing part', change: { body: {} }, path: 'body.answerReferral' },
    { what: 'yesterday', change: { effectiveOn: '2026-12-01' }, path: 'effectiveOn' },
  ])('is refused: $what', async ({ change, path }) => {
    const refused = await proposePolicy(c.director, proposal(change)).catch((error: { options: { fields: { path: string }[] } }) => error.options.fields.map(field => field.path))
    expect(refused).toContain(path)
  })
})
