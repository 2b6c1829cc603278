import jstat from 'jstat'
import { describe, expect, it } from 'vitest'
import { chanceOf, probabilityAtLeast } from '#shared/calculations/chance'
import { beyondBand, changePercent, compareWithEarlier } from '#shared/calculations/compare-with-earlier'
import { defaultPolicy, type AppliedLimit, type EarlierStudy, type Result } from '#shared/calculations/types'
import { carpalTunnelStudy } from '../../../fixtures/carpal-tunnel-study'
import { assess, policyWith, run, studyWith } from './study-maker'

const texts = (assessment: ReturnType<typeof assess>) => assessment.findings.map(one => one.text)

describe('draft findings of the study of both hands', () => {
  it('one sentence for each run and comparison, with limits and sides', () => {
    expect(texts(assess(carpalTunnelStudy()))).toEqual([
      'RIGHT median motor, abductor pollicis brevis: latency at wrist 5.2 ms (above the limit, ≤ 4.4), amplitude at wrist 6.8 mV (within the limit, ≥ 4.2), velocity elbow to wrist 54 m/s (within the limit, ≥ 51).',
      'RIGHT median sensory, digit 2 (140 mm): onset latency 3.8 ms (above the limit, ≤ 3.3), peak latency 4.6 ms (above the limit, ≤ 4.0), amplitude 12 µV (within the limit, ≥ 7).',
      'RIGHT ulnar sensory, digit 5 (140 mm): onset latency, peak latency and amplitude within limits.',
      'RIGHT ulnar motor, abductor digiti minimi: latency, amplitude, velocity and velocity drop within limits.',
      'LEFT median motor, abductor pollicis brevis: latency, amplitude and velocity within limits.',
      'LEFT median sensory, digit 2 (140 mm): onset latency, peak latency and amplitude within limits.',
      'LEFT ulnar sensory, digit 5 (140 mm): onset latency, peak latency and amplitude within limits.',
      'RIGHT median against ulnar, digits 2 and 5: sensory onset difference 1.1 ms (above the limit, ≤ 0.5), sensory peak difference 1.3 ms (above the limit, ≤ 0.4).',
      'RIGHT median against ulnar, motor latency: motor latency difference 2.3 ms (above the limit, ≤ 1.7).',
      'LEFT median against ulnar, digits 2 and 5: sensory onset difference 0.2 ms (within the limit, ≤ 0.5), sensory peak difference 0.3 ms (within the limit, ≤ 0.4, nearer to it than its measurement uncertainty).',
      'LEFT median against ulnar, motor latency: not computable: no LEFT ulnar motor run.',
    ])
  })
  it('each tied to its runs', () => {
    const { findings } = assess(carpalTunnelStudy())
    expect(findings.find(one => one.key === 'compare/right/median-ulnar-motor')?.runIds).toEqual(['right-median-motor', 'right-ulnar-motor'])
    expect(findings.find(one => one.key === 'run/left-median-motor')?.runIds).toEqual(['left-median-motor'])
  })
})

describe('draft findings otherwise', () => {
  const median = (values: Parameters<typeof run>[2][number][1], changes = {}) => studyWith([run('median-motor-apb', 'left', [['wrist', values]], changes)])
  it.each([
    ['not done', studyWith([{ id: 'x', technique: 'ulnar-motor-adm', side: 'left', rows: [], notDoneBecause: 'plaster cast' }]), 'LEFT ulnar motor, abductor digiti minimi: not done: plaster cast.'],
    ['nothing recorded', studyWith([{ id: 'x', technique: 'ulnar-motor-adm', side: 'left', rows: [] }]), 'LEFT ulnar motor, abductor digiti minimi: nothing recorded.'],
    ['absent', median({ latencyMs: 'no-response', amplitudeMv: 'no-response', distanceMm: 80 }), 'LEFT median motor, abductor pollicis brevis: latency at wrist no response (limit ≤ 4.4), amplitude at wrist no response (limit ≥ 4.2).'],
    ['technical is said and not flagged', median({ latencyMs: 'technical', amplitudeMv: 'technical', distanceMm: 80 }), 'LEFT median motor, abductor pollicis brevis: latency at wrist technical, amplitude at wrist technical.'],
    ['needle', studyWith([{ id: 'x', technique: 'needle-apb', side: 'left', rows: [{ id: 'x-0', site: 'muscle', values: {}, ordinals: { fibrillations: '2+', recruitment: 'reduced' } }] }]), 'LEFT needle, abductor pollicis brevis: fibrillation potentials 2+, recruitment reduced.'],
  ])('%s', (_, study, expected) => expect(texts(assess(study))[0]).toBe(expected))
  it('without a set nothing is called within', () => {
    const [text] = texts(assess(median({ latencyMs: 3.5, amplitudeMv: 8, distanceMm: 80 }), defaultPolicy))
    expect(text).toBe('LEFT median motor, abductor pollicis brevis: latency at wrist 3.5 ms (no limit: no set adopted here), amplitude at wrist 8.0 mV (no limit: no set adopted here).')
  })
  it('side differences are told only where a set has a limit for them', () => {
    const both = studyWith([run('ulnar-motor-adm', 'right', [['wrist', { latencyMs: 2.9, amplitudeMv: 9, distanceMm: 80 }]]), run('ulnar-motor-adm', 'left', [['wrist', { latencyMs: 3.6, amplitudeMv: 8, distanceMm: 80 }]])])
    expect(texts(assess(both)).some(text => text.includes('against LEFT'))).toBe(false)
    expect(texts(assess(both, policyWith('buschbacher-primary-studies'))).find(text => text.includes('against LEFT'))).toContain('latency side difference 0.7 ms (above the limit, ≤ 0.6,')
  })
})

describe('chance', () => {
  const limit = (percentile: number | null): AppliedLimit => ({ bound: 'upper', value: 1, unit: 'ms', setId: 's', setVersion: 1, setTitle: 's', rowId: 'r', subgroup: '', definition: '', percentile, basis: 'read', verified: false })
  const result = (verdict: Result['verdict']): Result => ({ key: 'k', quantity: 'latencyMs', label: '', unit: 'ms', typed: true, value: { kind: 'value', value: 1 }, print: '1.0', printUncertainty: '', verdict, flagged: false })
  const within = (percentile: number | null) => result({ kind: 'within', limits: [limit(percentile)], nearLimit: false })
  const outside = (percentile: number | null) => result({ kind: 'outside', direction: 'above', limit: limit(percentile), limits: [limit(percentile)], nearLimit: false })

  it.each([[10, 0.03, 1], [20, 0.03, 2], [30, 0.03, 6], [30, 0.025, 1], [9, 0.05, 9], [200, 0.03, 15]])('%i limits at %f: at least %i outside, as the statistics library has it', (count, tail, seen) => {
    const expected = 1 - jstat.jStat.binomial.cdf(seen - 1, count, tail)
    expect(probabilityAtLeast(Array.from({ length: count }, () => tail), seen)).toBeCloseTo(expected, 10)
  })
  it.each([[5, 0.025, 1, 11.9], [9, 0.025, 1, 20.4], [20, 0.05, 1, 64.2], [30, 0.03, 1, 59.9], [20, 0.025, 2, 8.8], [30, 0.025, 2, 17.2]])('%i limits at %f: at least %i outside in %f % (formula collection F7.4, derived)', (count, tail, seen, percent) => {
    expect(100 * probabilityAtLeast(Array.from({ length: count }, () => tail), seen)).toBeCloseTo(percent, 1)
  })
  it.each([1, 2, 5, 9, 10, 20, 30, 60])('%i trials, against the statistics library at every count', (n) => {
    for (const p of [0.01, 0.025, 0.03, 0.05, 0.5]) {
      for (let seen = 1; seen <= Math.min(n, 8); seen++) expect(probabilityAtLeast(Array.from({ length: n }, () => p), seen)).toBeCloseTo(1 - jstat.jStat.binomial.cdf(seen - 1, n, p), 10)
    }
  })
  it('two unequal tails both seen', () => expect(probabilityAtLeast([0.03, 0.05], 2)).toBeCloseTo(0.0015, 12))
  it('nothing applied: none seen is certain, one impossible', () => expect([probabilityAtLeast([], 0), probabilityAtLeast([], 1)]).toEqual([1, 0]))
  it('none seen is certain, more than there are is impossible', () => expect([probabilityAtLeast([0.03], 0), probabilityAtLeast([0.03], 2)]).toEqual([1, 0]))
  it('unequal tails', () => expect(probabilityAtLeast([0.03, 0.05], 1)).toBeCloseTo(1 - 0.97 * 0.95, 12))
  it('counts limits at both ends of the scale alike, and leaves out those without a percentile', () => {
    const line = chanceOf([within(97), within(3), outside(97), within(null), outside(null), result({ kind: 'absent', limits: [limit(97)] }), result({ kind: 'cold', because: '', limits: [limit(97)], wouldBe: 'above' })])
    expect(line).toMatchObject({ limitsApplied: 3, seenOutside: 1, sentence: '3 limits applied; about 0.1 would fall outside by chance in health. 1 does. 2 more without a stated percentile are not counted.' })
    expect(line.expectedOutside).toBeCloseTo(0.09, 12)
  })
  it('without limits says so', () => expect([chanceOf([]).sentence, chanceOf([within(null)]).sentence]).toEqual(['No limit was applied.', 'No limit with a stated percentile was applied.']))
})

describe('beside an earlier study', () => {
  const now = assess(carpalTunnelStudy())
  const then: EarlierStudy = { studyId: 'earlier', studyDate: '2025-05-06', siteName: 'North', technologist: 'Invented A', assessment: assess(carpalTunnelStudy(4.4)) }
  it('each number beside the same number, with the band', () => {
    const changes = compareWithEarlier(now, [then])
    expect(changes.find(one => one.resultKey === 'right-median-motor/rmm-wrist/latencyMs')).toMatchObject({ print: '5.2', printEarlier: '4.4', bandPercent: 10, beyondBand: 'yes', side: 'right', remarks: [] })
    expect(changes.find(one => one.resultKey === 'right-median-sensory/right-median-sensory-wrist/amplitudeUv')).toMatchObject({ bandPercent: 40, beyondBand: 'no' })
    expect(changes.some(one => one.quantity === 'distanceMm')).toBe(false)
  })
  it('says what differs otherwise', () => {
    const [change] = compareWithEarlier(now, [then], { siteName: 'South', technologist: 'Invented B' })
    expect(change?.remarks).toEqual(['recorded at North then', 'recorded by Invented A then'])
  })
  it('a lost response has no per cent', () => {
    const study = carpalTunnelStudy()
    const lost = assess({ ...study, runs: study.runs.map(one => one.id === 'right-median-sensory' ? { ...one, rows: one.rows.map(row => ({ ...row, values: { onsetLatencyMs: 'no-response', peakLatencyMs: 'no-response', amplitudeUv: 'no-response', distanceMm: 140 } as const })) } : one) })
    const change = compareWithEarlier(lost, [then]).find(one => one.resultKey.endsWith('right-median-sensory-wrist/amplitudeUv'))
    expect(change).toMatchObject({ changePercent: { kind: 'not-computable' }, beyondBand: 'not-known', remarks: ['no response where there was a response'] })
  })
  it.each([[-37.7, 40, 'no'], [-16.4, 10, 'yes'], [16.6, 10, 'yes'], [10, 10, 'no'], [-40.1, 40, 'yes'], [5, null, 'not-known']] as const)('%f % against %s: %s', (value, band, expected) => expect(beyondBand({ kind: 'value', value }, band)).toBe(expected))
  it('from nothing there is no change in per cent', () => expect(changePercent(3, 0)).toEqual({ kind: 'not-computable', because: 'the earlier value is not above 0' }))
  it('is part of the assessment when earlier studies are given', () => expect(assess(carpalTunnelStudy()).changes).toEqual([]))
})
