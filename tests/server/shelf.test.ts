import { describe, expect, it } from 'vitest'
import { adoptedSets } from '#server/database/queries/policy'
import { approveAdoption, checkRows, endAdoption, proposeAdoption } from '#server/services/adopt-set'
import { assessStoredStudy } from '#server/services/assess-stored-study'
import { listSets, viewSet } from '#server/services/view-shelf'
import { clinic } from './bench-helpers'
import { testContext } from './helpers'

const t = await testContext()
const c = await clinic(t)
const set = 'aanem-ndtf-2016'
const proposal = (changes: object = {}) => ({ siteId: c.site.id, setId: set, setVersion: 1, techniques: null, effectiveOn: '2026-12-02', ...changes })
const inUse = async (day: string) => (await adoptedSets(t.db, c.site.id, day)).map(one => one.setId)

describe('a set', () => {
  it('judges only after another person approved it, from its first day to the day before its end', async () => {
    const { id } = await proposeAdoption(c.director, proposal({ effectiveOn: '2026-12-04' }))
    expect(await inUse('2026-12-05')).toEqual([])
    await expect(approveAdoption(c.director, { id })).rejects.toMatchObject({ code: 'not-allowed' })
    const secondDirector = t.as(await t.makeUser({ roles: [{ siteId: c.site.id, role: 'medical-director' }] }))
    await approveAdoption(secondDirector, { id })
    await expect(approveAdoption(secondDirector, { id })).rejects.toMatchObject({ code: 'wrong-state' })
    expect(await inUse('2026-12-03')).toEqual([])
    expect(await inUse('2026-12-04')).toEqual([set])
    t.clock.set('2026-12-10T09:00:00.000Z')
    await endAdoption(c.director, { id })
    expect(await inUse('2026-12-10')).toEqual([set])
    expect(await inUse('2026-12-11')).toEqual([])
    await expect(endAdoption(c.director, { id })).rejects.toMatchObject({ code: 'wrong-state' })
    t.clock.set('2026-12-02T09:00:00.000Z')
  })
  it('approved late starts on the day of approval, so that no finished study is judged anew', async () => {
    const { id } = await proposeAdoption(c.neurologist, proposal({ setId: 'late-responses' }))
    t.clock.set('2026-12-08T09:00:00.000Z')
    await approveAdoption(c.director, { id })
    expect(await inUse('2026-12-07')).not.toContain('late-responses')
    expect(await inUse('2026-12-08')).toContain('late-responses')
    t.clock.set('2026-12-02T09:00:00.000Z')
  })
  it('taken back before approval never judges', async () => {
    const { id } = await proposeAdoption(c.neurologist, proposal({ setId: 'paediatric' }))
    await endAdoption(c.neurologist, { id })
    await expect(approveAdoption(c.director, { id })).rejects.toMatchObject({ code: 'wrong-state' })
  })
  it.each([
    { what: 'a set that is not on the shelf', change: { setId: 'no-such-set' }, path: 'setId' },
    { what: 'a version that does not exist', change: { setVersion: 99 }, path: 'setId' },
    { what: 'an unknown technique', change: { techniques: ['no-such-nerve'] }, path: 'techniques' },
    { what: 'yesterday', change: { effectiveOn: '2026-12-01' }, path: 'effectiveOn' },
  ])('is refused: $what', async ({ change, path }) => {
    await expect(proposeAdoption(c.neurologist, proposal(change))).rejects.toMatchObject({ code: 'not-valid', options: { fields: [{ path }] } })
  })
})

describe('the shelf', () => {
  it('lists every set with the sites that the person may see', async () => {
    const elsewhere = await t.makeSite()
    const other = t.as(await t.makeUser({ roles: [{ siteId: elsewhere.id, role: 'neurologist' }] }))
    const theirs = await proposeAdoption(other, proposal({ siteId: elsewhere.id }))
    const sets = await listSets(c.neurologist, [c.site.id])
    expect(sets.length).toBeGreaterThan(3)
    const shown = sets.find(one => one.id === set)!
    expect(shown.limitRows).toBeGreaterThan(0)
    expect(shown.adoptedAt.map(adoption => adoption.siteId)).toEqual([c.site.id])
    expect((await listSets(other, [elsewhere.id])).find(one => one.id === set)!.adoptedAt).toMatchObject([{ id: theirs.id, state: 'proposed', approvedBy: null }])
  })
  it('rows from memory are noted as compared with the paper, by whom; others cannot be', async () => {
    const whole = await viewSet(t.context, { id: 'preston-shapiro-adult' })
    const recalled = whole.rows.find(row => row.basis === 'from memory')!
    await checkRows(c.director, { setId: whole.id, setVersion: whole.version, rowIds: [recalled.id, recalled.id] })
    expect((await viewSet(t.context, { id: whole.id })).rowChecks).toMatchObject([{ rowId: recalled.id, checkedAt: '2026-12-02T09:00:00.000Z' }])
    await expect(checkRows(c.director, { setId: whole.id, setVersion: whole.version, rowIds: ['no-such-row'] })).rejects.toMatchObject({ code: 'not-valid' })
    await expect(viewSet(t.context, { id: 'no-such-set' })).rejects.toMatchObject({ code: 'not-found' })
  })
})

/** The invented study of the browser test: a woman, born 1974-03-14, 162 cm, 74 kg. Expected figures by hand from set and formula. */
describe('a whole study on the server', () => {
  it('is judged by the adopted set, six results outside, and by nothing before adoption', async () => {
    const clinicB = await clinic(t)
    const { saveBodySize } = await import('#server/services/save-body-size')
    const { addTemperature } = await import('#server/services/save-temperature')
    const by = clinicB.technologist
    const id = await clinicB.recording({ side: 'both', patientId: (await t.makePatient({ birthDate: '1974-03-14', sexForLimits: 'female' })).id })
    await saveBodySize(by, { id, heightCm: 162, weightKg: 74 })
    for (const [side, celsius] of [['right', 32.6], ['left', 32.4]] as const) await addTemperature(by, { id, segment: 'hand', side, celsius, method: 'skin probe', warmed: false })
    const sensory = (onset: number, peak: number, microvolt: number) => [{ onsetLatencyMs: onset, peakLatencyMs: peak, amplitudeUv: microvolt, distanceMm: 140 }]
    const motor = (...rows: [number, number, number][]) => rows.map(([latencyMs, amplitudeMv, distanceMm]) => ({ latencyMs, amplitudeMv, distanceMm }))
    await clinicB.type(id, 'median-motor-apb', 'right', motor([5.2, 6.8, 80], [9.2, 6.5, 215]))
    await clinicB.type(id, 'median-sensory-d2', 'right', sensory(3.8, 4.6, 12))
    await clinicB.type(id, 'ulnar-sensory-d5', 'right', sensory(2.7, 3.3, 14))
    await clinicB.type(id, 'ulnar-motor-adm', 'right', motor([2.9, 9.6, 80], [6.4, 9.4, 205], [8.1, 9.2, 100]))
    await clinicB.type(id, 'median-motor-apb', 'left', motor([3.9, 8.1, 80], [7.8, 8.0, 210]))
    await clinicB.type(id, 'median-sensory-d2', 'left', sensory(3.0, 3.7, 18))
    await clinicB.type(id, 'ulnar-sensory-d5', 'left', sensory(2.8, 3.4, 16))
    expect((await assessStoredStudy(t.context, id)).assessment.flagged).toEqual([])
    const before = (await assessStoredStudy(t.context, id)).fingerprint
    await clinicB.adopt(set)
    const { assessment, fingerprint } = await assessStoredStudy(t.context, id)
    expect(fingerprint).not.toBe(before)
    const results = [...assessment.runs, ...assessment.comparisons].flatMap(one => one.results)
    const flagged = assessment.flagged.map(key => results.find(result => result.key === key)!).map(result => `${result.side} ${result.quantity} ${result.print}`)
    expect(flagged.toSorted()).toEqual(['right latencyMs 5.2', 'right motorLatencyDifferenceMs 2.3', 'right onsetDifferenceMs 1.1', 'right onsetLatencyMs 3.8', 'right peakDifferenceMs 1.3', 'right peakLatencyMs 4.6'])
    const velocities = results.filter(result => result.quantity === 'velocityMps' && result.value.kind === 'value').map(result => `${result.side} ${result.print}`)
    expect(velocities).toEqual(['right 54', 'left 54', 'right 37', 'left 47', 'right 52', 'left 50', 'right 59', 'right 59'])
  })
})
