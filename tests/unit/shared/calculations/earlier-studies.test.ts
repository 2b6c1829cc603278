import { describe, expect, it } from 'vitest'
import { chanceOf } from '#shared/calculations/chance'
import { bandFor, compareWithEarlier } from '#shared/calculations/compare-with-earlier'
import { defaultPolicy, type AppliedLimit, type EarlierStudy, type Result } from '#shared/calculations/types'
import type { Run, RunRow, Study } from '#shared/schemas/study'
import { assess, run, studyWith } from './study-maker'

type Values = RunRow['values']
const median = (values: Values, changes: Partial<Run> = {}) => run('median-motor-apb', 'right', [['wrist', values]], { id: 'm', ...changes })
const assessed = (runs: Run[], changes: Partial<Study> = {}) => assess(studyWith(runs, changes), defaultPolicy)
const earlier = (runs: Run[], changes: Partial<Study> = {}): EarlierStudy => ({ studyId: 'then', studyDate: '2025-05-06', siteName: 'North', technologist: 'Invented A', assessment: assessed(runs, changes) })
const cold: Partial<Study> = { temperatures: [] }

/** Bands: 10 % for latencies and velocities, 40 % for amplitudes: formula collection F1.5. */
describe('a number beside the same of an earlier study', () => {
  it('has all that is needed to print it', () => {
    expect(compareWithEarlier(assessed([median({ latencyMs: 5.2 }, { id: 'now' })]), [earlier([median({ latencyMs: 4 })])])).toEqual([{
      key: 'earlier/then/now/now-0/latencyMs', resultKey: 'now/now-0/latencyMs', runId: 'now', side: 'right', studyId: 'then', studyDate: '2025-05-06', quantity: 'latencyMs', label: 'latency at wrist', unit: 'ms',
      print: '5.2', printEarlier: '4.0', changePercent: { kind: 'value', value: expect.closeTo(30, 10) }, bandPercent: 10, beyondBand: 'yes', remarks: [],
      source: 'Twice the coefficient of variation between sessions: 4.2 to 9.8 % for latencies, velocities and F latencies, 15.6 to 19.8 % for amplitudes (PMC2777171, read); rounded up to 10 and 40 % (derived)',
    }])
  })
  it.each([['ms', 10], ['m/s', 10], ['mV', 40], ['µV', 40], ['%', null], ['', null]])('band of %s: %s', (unit, band) => expect(bandFor(unit)).toBe(band))

  const quantities = (now: Run[], then: Run[], changes: Partial<Study> = {}) => compareWithEarlier(assessed(now, changes), [earlier(then, changes)]).map(one => one.quantity)
  const train = (values: Values) => run('repetitive-ulnar-adm', 'right', [['rest', values]], { id: 't' })
  it.each<[name: string, now: Run[], then: Run[], quantities: string[]]>([
    ['what is followed', [median({ latencyMs: 4, amplitudeMv: 8, durationMs: 5, distanceMm: 80 })], [median({ latencyMs: 4, amplitudeMv: 8, durationMs: 5, distanceMm: 80 })], ['latencyMs', 'amplitudeMv']],
    ['sensory numbers', [run('sural', 'right', [['calf', { onsetLatencyMs: 3, peakLatencyMs: 4, amplitudeUv: 10, distanceMm: 140 }]])], [run('sural', 'right', [['calf', { onsetLatencyMs: 3, peakLatencyMs: 4, amplitudeUv: 10, distanceMm: 140 }]])], ['onsetLatencyMs', 'peakLatencyMs', 'amplitudeUv', 'velocityMps']],
    ['late responses', [run('tibial-f-ah', 'right', [['ankle', { minimumLatencyMs: 50, meanLatencyMs: 52 }]]), run('h-reflex-soleus', 'right', [['popliteal-fossa', { hLatencyMs: 30, mLatencyMs: 5 }]]), run('blink', 'right', [['supraorbital', { r1Ms: 11, r2IpsilateralMs: 33, r2ContralateralMs: 34 }]])],
      [run('tibial-f-ah', 'right', [['ankle', { minimumLatencyMs: 50, meanLatencyMs: 52 }]]), run('h-reflex-soleus', 'right', [['popliteal-fossa', { hLatencyMs: 30, mLatencyMs: 5 }]]), run('blink', 'right', [['supraorbital', { r1Ms: 11, r2IpsilateralMs: 33, r2ContralateralMs: 34 }]])], ['minimumLatencyMs', 'hLatencyMs', 'r1Ms', 'r2IpsilateralMs', 'r2ContralateralMs']],
    ['a train as well', [train({ amplitudeMv: 8, rateHz: 3 })], [train({ amplitudeMv: 8, rateHz: 3 })], ['amplitudeMv']],
    ['the other side is another number', [median({ latencyMs: 4 })], [{ ...median({ latencyMs: 4 }), side: 'left' }], []],
    ['another technique', [median({ latencyMs: 4 })], [{ ...median({ latencyMs: 4 }), technique: 'ulnar-motor-adm' }], []],
    ['another site', [median({ latencyMs: 4 })], [run('median-motor-apb', 'right', [['elbow', { latencyMs: 8 }]])], []],
    ['not recorded then', [median({ latencyMs: 4, amplitudeMv: 8 })], [median({ latencyMs: 4 })], ['latencyMs']],
    ['not computable then', [run('sural', 'right', [['calf', { onsetLatencyMs: 3, distanceMm: 140 }]])], [run('sural', 'right', [['calf', { onsetLatencyMs: 3 }]])], ['onsetLatencyMs']],
  ])('%s', (_, now, then, expected) => expect(quantities(now, then)).toEqual(expected))

  it('a run that was repeated warm stands back', () => {
    const temperatures = [{ id: 'c', segment: 'hand' as const, side: 'right' as const, celsius: 28, warmed: false }, { id: 'w', segment: 'hand' as const, side: 'right' as const, celsius: 33, warmed: true }]
    const twice = [median({ latencyMs: 6 }, { id: 'cold', temperatureId: 'c' }), median({ latencyMs: 4 }, { id: 'warm', temperatureId: 'w', repeats: 'cold' })]
    expect(compareWithEarlier(assessed(twice, { temperatures }), [earlier([median({ latencyMs: 4 })])]).map(one => one.runId)).toEqual(['warm'])
  })
  it('every earlier study, in its order', () => {
    const studies = ['a', 'b'].map(studyId => ({ ...earlier([median({ latencyMs: 4 })]), studyId }))
    expect(compareWithEarlier(assessed([median({ latencyMs: 5 })]), studies).map(one => one.studyId)).toEqual(['a', 'b'])
  })

  it.each<[name: string, now: Values, then: Values, expected: Record<string, unknown>]>([
    ['a response where there was none', { latencyMs: 4 }, { latencyMs: 'no-response' }, { remarks: ['a response where there was none'], changePercent: { kind: 'not-computable', because: 'not two numbers' }, beyondBand: 'not-known' }],
    ['no response where there was one', { latencyMs: 'no-response' }, { latencyMs: 4 }, { remarks: ['no response where there was a response'], changePercent: { kind: 'not-computable', because: 'not two numbers' }, beyondBand: 'not-known' }],
    ['none both times', { latencyMs: 'no-response' }, { latencyMs: 'no-response' }, { remarks: [], changePercent: { kind: 'not-computable', because: 'not two numbers' } }],
    ['not recordable now', { latencyMs: 'technical' }, { latencyMs: 4 }, { remarks: ['technical where there was a response'] }],
    ['10 %', { latencyMs: 4.4 }, { latencyMs: 4 }, { beyondBand: 'no' }],
    ['more', { latencyMs: 4.5 }, { latencyMs: 4 }, { beyondBand: 'yes' }],
  ])('%s', (_, now, then, expected) => expect(compareWithEarlier(assessed([median(now)]), [earlier([median(then)])])[0]).toMatchObject(expected))

  const remarks = (now: Partial<Study>, then: Partial<Study>, where: Parameters<typeof compareWithEarlier>[2] = {}) => compareWithEarlier(assessed([median({ latencyMs: 4 })], now), [earlier([median({ latencyMs: 4 })], then)], where)[0]?.remarks
  const chilly: Partial<Study> = { temperatures: [{ id: 't', segment: 'hand', side: 'right', celsius: 28, warmed: false }] }
  it.each<[name: string, now: Partial<Study>, then: Partial<Study>, where: Parameters<typeof compareWithEarlier>[2], expected: string[]]>([
    ['alike', {}, {}, { siteName: 'North', technologist: 'Invented A' }, []],
    ['another site', {}, {}, { siteName: 'South', technologist: 'Invented A' }, ['recorded at North then']],
    ['another technologist', {}, {}, { technologist: 'Invented B' }, ['recorded by Invented A then']],
    ['cold now', chilly, {}, {}, ['limb cold now']],
    ['cold then', {}, chilly, {}, ['limb cold then']],
    ['no temperature at all', cold, cold, {}, ['limb cold now', 'limb cold then']],
  ])('%s', (_, now, then, where, expected) => expect(remarks(now, then, where)).toEqual(expected))
})

describe('the chance line', () => {
  const limit = (percentile: number | null): AppliedLimit => ({ bound: 'upper', value: 1, unit: 'ms', setId: 's', setVersion: 1, setTitle: 's', rowId: 'r', subgroup: '', definition: '', percentile, basis: 'read', verified: false })
  const result = (verdict: Result['verdict']): Result => ({ key: 'k', quantity: 'latencyMs', label: '', unit: 'ms', typed: true, value: { kind: 'value', value: 1 }, print: '1.0', printUncertainty: '', verdict, flagged: false })
  const within = (...percentiles: (number | null)[]) => result({ kind: 'within', limits: percentiles.map(limit), nearLimit: false })
  const outside = (percentile: number | null) => result({ kind: 'outside', direction: 'above', limit: limit(percentile), limits: [limit(percentile)], nearLimit: false })
  it.each<[results: Result[], sentence: string]>([
    [[within(97)], '1 limit applied; about 0.0 would fall outside by chance in health. 0 do.'],
    [[within(97, 3)], '2 limits applied; about 0.1 would fall outside by chance in health. 0 do.'],
    [[outside(97), within(95)], '2 limits applied; about 0.1 would fall outside by chance in health. 1 does.'],
    [[outside(97), outside(3)], '2 limits applied; about 0.1 would fall outside by chance in health. 2 do.'],
    [[within(97), within(null)], '1 limit applied; about 0.0 would fall outside by chance in health. 0 do. 1 more without a stated percentile is not counted.'],
    [[within(97), outside(null), within(null)], '1 limit applied; about 0.0 would fall outside by chance in health. 0 do. 2 more without a stated percentile are not counted.'],
    [[outside(null)], 'No limit with a stated percentile was applied.'],
    [[], 'No limit was applied.'],
  ])('%#', (results, sentence) => expect(chanceOf(results).sentence).toBe(sentence))
  it('says what it takes for granted, and how likely it is', () => {
    expect(chanceOf([outside(97), within(95)])).toMatchObject({ assumption: 'Taken as if the values were independent of each other; values of one nerve are not quite.', limitsApplied: 2, seenOutside: 1, expectedOutside: expect.closeTo(0.08, 12), probabilityAtLeastSeen: expect.closeTo(1 - 0.97 * 0.95, 12) })
  })
})
