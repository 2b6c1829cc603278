import { describe, expect, it } from 'vitest'
import { policyOf } from '#server/database/queries/policy'
import { approvePolicy, proposePolicy } from '#server/services/policies'
import { patternSets } from '#shared/calculations/patterns/all-sets'
import type { PolicyName } from '#shared/policies/index'
import { clinic } from './bench-helpers'
import { testContext } from './helpers'

/** Temperature, uncertainty and patterns: proposed by one, approved by another, for studies from the first day on. */
const t = await testContext()
const [here, there] = [await clinic(t), await clinic(t)]
const second = t.as(await t.makeUser({ roles: ['medical-director'] }))
const study = (studyDate: string, siteId = here.site.id) => ({ siteId, studyDate, excludedEntrapment: 0, policyJson: null })
const on = async (day: string, siteId?: string) => await policyOf(t.db, study(day, siteId))
async function decide(name: PolicyName, body: object, effectiveOn = '2026-12-10') {
  const { id } = await proposePolicy(here.director, { name, siteId: here.site.id, body, note: 'a test', effectiveOn })
  await approvePolicy(second, { id })
}
const recalled = patternSets.find(set => set.basis === 'memory')!.id
const read = patternSets.find(set => set.basis !== 'memory')!.id

describe('a study', () => {
  it('is judged by what its site entered until a first policy counts', async () => {
    await t.db.updateTable('site').set({ handMinimumC: 31, distanceUncertaintyMm: 7 }).where('id', '=', here.site.id).execute()
    expect(await on('2026-12-02')).toMatchObject({ handMinimumC: 31, footMinimumC: 30, distanceUncertaintyMm: 7, latencyUncertaintyMs: 0.1, temperatureCorrection: false, patternsOn: [], patternsOff: [] })
  })
  it.each([
    ['temperature', { handMinimumC: 33, footMinimumC: 31, correctionShown: true }, { handMinimumC: 33, footMinimumC: 31, temperatureCorrection: true }],
    ['uncertainty', { distanceMm: 4, latencyMs: 0.2 }, { distanceUncertaintyMm: 4, latencyUncertaintyMs: 0.2 }],
    ['patterns', { on: [recalled], off: [read] }, { patternsOn: [recalled], patternsOff: [read] }],
  ] as const)('%s: from the first day on, at that site; older studies and other sites stay as they were', async (name, body, judged) => {
    const [older, elsewhere] = [await on('2026-12-09'), await on('2026-12-10', there.site.id)]
    await decide(name, body)
    expect(await on('2026-12-10')).toMatchObject(judged)
    expect(await on('2026-12-09')).toEqual(older)
    expect(await on('2026-12-10', there.site.id)).toEqual(elsewhere)
  })
  it('that is signed keeps what it was signed with', async () => {
    const frozen = { ...await on('2026-12-02'), handMinimumC: 30.5 }
    expect(await policyOf(t.db, { ...study('2026-12-20'), policyJson: JSON.stringify(frozen) })).toEqual(frozen)
  })
})

describe('is refused', () => {
  it.each([
    ['temperature', { handMinimumC: 45, footMinimumC: 30, correctionShown: false }, 'body.handMinimumC'],
    ['uncertainty', { distanceMm: -1, latencyMs: 0.1 }, 'body.distanceMm'],
    ['patterns', { on: [read], off: [] }, 'body.on'],
    ['patterns', { on: [], off: ['no-such-set'] }, 'body.off.0'],
    ['patterns', { on: [recalled], off: [recalled] }, 'body.off'],
  ] as const)('%s %o', async (name, body, path) => {
    await expect(proposePolicy(here.director, { name, siteId: here.site.id, body, note: '', effectiveOn: '2026-12-10' })).rejects.toMatchObject({ options: { fields: [expect.objectContaining({ path })] } })
  })
})
