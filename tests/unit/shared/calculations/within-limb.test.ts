import { describe, expect, it } from 'vitest'
import { assessStudy } from '#shared/calculations/assess-study'
import { defaultPolicy, type ComparisonAssessment } from '#shared/calculations/types'
import type { Run, RunRow, Study } from '#shared/schemas/study'
import { adopt, limitRow, tableOf } from './limit-fixtures'
import { resultLine, verdictLine } from './result-lines'
import { assess, run, studyWith } from './study-maker'

type Values = RunRow['values']
const sites: Record<string, string> = { 'median-mixed-palm': 'palm', 'ulnar-mixed-palm': 'palm', 'sural': 'calf', 'radial-sensory-snuffbox': 'forearm', 'lateral-antebrachial': 'elbow', 'medial-antebrachial': 'elbow' }
const one = (technique: string, values: Values, changes: Partial<Run> = {}): Run => run(technique, 'right', [[sites[technique] ?? 'wrist', values]], { id: technique, ...changes })
const compared = (runs: Run[], changes: Partial<Study> = {}) => assess(studyWith(runs, changes), defaultPolicy).comparisons
const lines = (comparison: ComparisonAssessment | undefined) => comparison && [comparison.title, comparison.runIds.join(' - '), ...comparison.results.map(result => resultLine(result).replace(/^compare\/right\//, ''))]
const peak = (peakLatencyMs: number, distanceMm: number): Values => ({ peakLatencyMs, distanceMm })

/** Differences are first minus second, with 0.1 ms x √2; the index adds three of them: 0.1 ms x √6. */
describe('comparisons within one limb', () => {
  it.each<[runs: Run[], expected: string[]]>([
    [[one('median-sensory-d2', { onsetLatencyMs: 3.8, peakLatencyMs: 4.6, distanceMm: 140 }), one('ulnar-sensory-d5', { onsetLatencyMs: 2.7, peakLatencyMs: 3.4, distanceMm: 140 })], [
      'RIGHT median against ulnar, digits 2 and 5', 'median-sensory-d2 - ulnar-sensory-d5',
      'median-ulnar-sensory/onsetDifferenceMs | sensory onset difference 1.1 ± 0.1 ms | 3.8 ms - 2.7 ms | Grossart, Prahlow, Buschbacher 2006, as selected by Chen et al., Muscle Nerve 2016;54:371-377 (recalled)',
      'median-ulnar-sensory/peakDifferenceMs | sensory peak difference 1.2 ± 0.1 ms | 4.6 ms - 3.4 ms | Grossart, Prahlow, Buschbacher 2006, as selected by Chen et al., Muscle Nerve 2016;54:371-377 (recalled)',
    ]],
    [[one('median-motor-apb', { latencyMs: 3.5 }), one('ulnar-motor-adm', { latencyMs: 2.9 })], [
      'RIGHT median against ulnar, motor latency', 'median-motor-apb - ulnar-motor-adm',
      'median-ulnar-motor/motorLatencyDifferenceMs | motor latency difference 0.6 ± 0.1 ms | 3.5 ms - 2.9 ms | Chen et al., Muscle Nerve 2016;54:371-377 (recalled)',
    ]],
    [[one('median-motor-lumbrical', { latencyMs: 3.5 }), one('ulnar-motor-interosseous', { latencyMs: 2.9 })], [
      'RIGHT second lumbrical against interosseous', 'median-motor-lumbrical - ulnar-motor-interosseous',
      'lumbrical-interosseous/motorLatencyDifferenceMs | motor latency difference 0.6 ± 0.1 ms | 3.5 ms - 2.9 ms | AAEM/AAN/AAPMR practice parameter, Jablecki et al., Muscle Nerve 2002;25:918-922 (summary read)',
    ]],
    [[one('lateral-antebrachial', { onsetLatencyMs: 1.8, peakLatencyMs: 2.4 }), one('medial-antebrachial', { onsetLatencyMs: 1.9, peakLatencyMs: 2.5 })], [
      'RIGHT lateral against medial antebrachial', 'lateral-antebrachial - medial-antebrachial',
      'antebrachial/onsetDifferenceMs | onset difference -0.1 ± 0.1 ms | 1.8 ms - 1.9 ms | Buschbacher et al., Arch Phys Med Rehabil 2000;81:1563-1566 (abstract read)',
      'antebrachial/peakDifferenceMs | peak difference -0.1 ± 0.1 ms | 2.4 ms - 2.5 ms | Buschbacher et al., Arch Phys Med Rehabil 2000;81:1563-1566 (abstract read)',
    ]],
    [[one('sural', { amplitudeUv: 6 }), one('radial-sensory-snuffbox', { amplitudeUv: 20 })], [
      'RIGHT sural against superficial radial amplitude', 'sural - radial-sensory-snuffbox',
      'sural-radial/suralRadialRatio | sural/radial ratio 0.30 | sural amplitude / superficial radial amplitude | Rutkove et al., Muscle Nerve 1997;20:1236-1241 (abstract read)',
    ]],
    [[one('median-motor-apb', { amplitudeMv: 4 }), one('ulnar-motor-fdi', { amplitudeMv: 6 }), one('ulnar-motor-adm', { amplitudeMv: 8 })].reverse(), [
      'RIGHT split-hand index', 'median-motor-apb - ulnar-motor-fdi - ulnar-motor-adm',
      'split-hand/splitHandIndex | split-hand index 3.0 mV | APB x FDI / ADM amplitude | Neurol Int 2022;14:707-715',
    ]],
  ])('$0.0.technique', (runs, expected) => expect(lines(compared(runs).findLast(comparison => comparison.title === expected[0]))).toEqual(expected))

  const palm = [one('median-mixed-palm', peak(2.2, 80)), one('ulnar-mixed-palm', peak(2, 80))]
  const ring = [one('median-sensory-d4', peak(3.7, 140)), one('ulnar-sensory-d4', peak(3.3, 140))]
  const thumb = [one('median-sensory-d1', peak(2.8, 100)), one('radial-sensory-d1', peak(2.5, 100))]
  const LEW = 'Lew et al., Muscle Nerve 2000;23:1261-1264 (read)'
  it('palm, ring finger and thumb, and the index of the three', () => {
    expect(compared([...palm, ...ring, ...thumb]).flatMap(comparison => lines(comparison) ?? [])).toEqual([
      'RIGHT median against ulnar, digit 4', 'median-sensory-d4 - ulnar-sensory-d4', `median-ulnar-ring/peakDifferenceMs | peak difference 0.4 ± 0.1 ms | 3.7 ms - 3.3 ms | ${LEW}`,
      'RIGHT median against ulnar, palm to wrist', 'median-mixed-palm - ulnar-mixed-palm', `median-ulnar-palm/peakDifferenceMs | peak difference 0.2 ± 0.1 ms | 2.2 ms - 2 ms | ${LEW}`,
      'RIGHT median against radial, digit 1', 'median-sensory-d1 - radial-sensory-d1', `median-radial-thumb/peakDifferenceMs | peak difference 0.3 ± 0.1 ms | 2.8 ms - 2.5 ms | ${LEW}`,
      'RIGHT combined sensory index', 'median-mixed-palm - ulnar-mixed-palm - median-sensory-d4 - ulnar-sensory-d4 - median-sensory-d1 - radial-sensory-d1',
      'combined-sensory-index/combinedIndexMs | combined sensory index 0.9 ± 0.2 ms | palm + ring finger + thumb difference of peak latency | Robinson et al., Muscle Nerve 1998;21:1166-1171; Lew et al., Muscle Nerve 2000;23:1261-1264',
    ])
  })
  it.each<[name: string, runs: Run[], because: string]>([
    ['one part not recorded', [...palm, ...ring], 'no thumb difference'],
    ['one part without its second nerve', [...palm, ...ring, ...thumb.slice(0, 1)], 'no thumb difference'],
    ['the ring finger left out', [...palm, ...thumb], 'no ring finger difference'],
  ])('the index, %s', (_, runs, because) => expect(compared(runs).at(-1)?.results[0]?.value).toEqual({ kind: 'not-computable', because }))

  it.each<[name: string, runs: Run[], because: string]>([
    ['the second nerve not recorded', [one('median-motor-apb', { latencyMs: 3.5 })], 'no right ulnar motor run'],
    ['blank in the first', [one('median-motor-apb', { amplitudeMv: 8 }), one('ulnar-motor-adm', { latencyMs: 2.9 })], 'median motor: latency missing'],
    ['blank in the second', [one('median-motor-apb', { latencyMs: 3.5 }), one('ulnar-motor-adm', { amplitudeMv: 8 })], 'ulnar motor: latency missing'],
  ])('a difference, %s', (_, runs, because) => expect(compared(runs)[0]?.results[0]).toMatchObject({ value: { kind: 'not-computable', because }, verdict: { kind: 'none' } }))
  it('without a number there is no formula', () => expect('how' in compared([one('median-motor-apb', { latencyMs: 3.5 })])[0]!.results[0]!).toBe(false))

  it.each<[name: string, runs: Run[]]>([
    ['two skin nerves of the forearm, one alone', [one('lateral-antebrachial', { peakLatencyMs: 2.4 })]],
    ['the second nerve alone', [one('ulnar-motor-adm', { latencyMs: 2.9 })]],
    ['sural without radial', [one('sural', { amplitudeUv: 6 })]],
    ['radial without sural', [one('radial-sensory-snuffbox', { amplitudeUv: 20 })]],
    ['two muscles of three', [one('ulnar-motor-fdi', { amplitudeMv: 6 }), one('ulnar-motor-adm', { amplitudeMv: 8 })]],
    ['one part of the index', palm.slice(1)],
  ])('nothing: %s', (_, runs) => expect(compared(runs)).toEqual([]))

  it('right before left', () => {
    const both = [one('median-motor-apb', { latencyMs: 3.5 }), one('ulnar-motor-adm', { latencyMs: 2.9 })].flatMap(right => [{ ...right, id: `${right.id}-left`, side: 'left' as const }, right])
    expect(compared(both).map(comparison => comparison.side)).toEqual(['right', 'left', undefined, undefined])
  })
})

describe('limits of a comparison', () => {
  const table = tableOf([
    ['median-ulnar-sensory', 'peakDifferenceMs', 0.5, 140, 'antidromic', null], ['sural-radial', 'suralRadialRatio', 0.4, null, null, 'onset-to-peak'], ['combined-sensory-index', 'combinedIndexMs', 0.9, null, null, null], ['split-hand', 'splitHandIndex', 5, null, null, null],
  ].map(([technique, quantity, value, distanceMm, direction, amplitudeDefinition], index) => limitRow({ id: `r${index}`, at: null, technique: technique as string, quantity: quantity as string, value: value as number, distanceMm: distanceMm as number, direction: direction as null, amplitudeDefinition: amplitudeDefinition as null, unit: '' })))
  const verdict = (runs: Run[], changes: Partial<Study> = {}) => verdictLine(assessStudy(studyWith(runs, changes), [table], { ...defaultPolicy, adopted: [adopt(table)] }).comparisons.at(-1)!.results.at(-1)!.verdict)
  const d2 = (values: Values, changes?: Partial<Run>) => one('median-sensory-d2', { peakLatencyMs: 4.2, ...values }, changes)
  const d5 = (values: Values, changes?: Partial<Run>) => one('ulnar-sensory-d5', { peakLatencyMs: 3.4, ...values }, changes)
  const far = { distanceMm: 140 }
  it.each<[name: string, runs: Run[], verdict: string]>([
    ['one way and distance', [d2(far), d5(far)], 'outside ≤ 0.5, above'],
    ['two distances', [d2(far), d5({ distanceMm: 120 })], 'no-limit: recorded over 140 mm and 120 mm'],
    ['the second distance not given', [d2(far), d5({})], 'outside ≤ 0.5, above'],
    ['the first distance not given', [d2({}), d5(far)], 'not-judged: distance missing'],
    ['two directions', [d2(far, { direction: 'orthodromic' }), d5(far)], 'no-limit: recorded orthodromic and antidromic'],
    ['another direction than the limit\'s', [d2(far, { direction: 'orthodromic' }), d5(far, { direction: 'orthodromic' })], 'no-limit: the set\'s limit is for antidromic recording'],
    ['sural and radial measured in one way', [one('sural', { amplitudeUv: 10 }), one('radial-sensory-snuffbox', { amplitudeUv: 20 })], 'outside ≤ 0.4, above'],
    ['in two ways', [one('sural', { amplitudeUv: 10 }, { amplitudeDefinition: 'peak-to-peak' }), one('radial-sensory-snuffbox', { amplitudeUv: 20 })], 'no-limit: the amplitudes are measured in two ways'],
    ['both in another way than the limit\'s', ['sural', 'radial-sensory-snuffbox'].map(technique => one(technique, { amplitudeUv: 10 }, { amplitudeDefinition: 'peak-to-peak' })), 'no-limit: the set\'s limit is for amplitude onset to peak'],
    ['a limit of the split hand', [one('median-motor-apb', { amplitudeMv: 6 }), one('ulnar-motor-fdi', { amplitudeMv: 6 }), one('ulnar-motor-adm', { amplitudeMv: 6 })], 'outside ≤ 5, above'],
  ])('%s', (_, runs, expected) => expect(verdict(runs)).toBe(expected))

  const cold = (celsius: number): Partial<Study> => ({ temperatures: [{ id: 'a', segment: 'hand', side: 'right', celsius: 33, warmed: false }, { id: 'b', segment: 'hand', side: 'right', celsius, warmed: false }] })
  it.each<[name: string, cold: [string, string], verdict: string]>([
    ['both cold', ['b', 'b'], 'cold ≤ 0.5: cold, not interpretable as slowing: RIGHT hand 28.0 °C, below 32 °C'],
    ['the first alone cold', ['b', 'a'], 'cold ≤ 0.5: cold, not interpretable as slowing: RIGHT hand 28.0 °C, below 32 °C'],
    ['both warm', ['a', 'a'], 'outside ≤ 0.5, above'],
  ])('%s', (_, [first, second], expected) => expect(verdict([d2(far, { temperatureId: first }), d5(far, { temperatureId: second })], cold(28))).toBe(expected))
  it('one cold may hide a difference', () => expect(verdict([d2({ ...far, peakLatencyMs: 3.5 }, { temperatureId: 'a' }), d5(far, { temperatureId: 'b' })], cold(28))).toBe('cold ≤ 0.5: may be masked by cold: RIGHT hand 28.0 °C, below 32 °C'))
})
