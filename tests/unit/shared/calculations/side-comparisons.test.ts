import { describe, expect, it } from 'vitest'
import { assessStudy } from '#shared/calculations/assess-study'
import { defaultPolicy, type Assessment } from '#shared/calculations/types'
import type { Run, RunRow } from '#shared/schemas/study'
import { adopt, limitRow, tableOf } from './limit-fixtures'
import { comparisonLines, resultLine, verdictLine } from './result-lines'
import { assess, run, studyWith } from './study-maker'

type Values = RunRow['values']
type Rows = [site: string, values: Values][]
/** The two sides of one technique: the rows of the right, those of the left. */
const sides = (technique: string, right: Rows, left: Rows, changes: [Partial<Run>, Partial<Run>] = [{}, {}]) =>
  [run(technique, 'right', right, { id: 'r', ...changes[0] }), run(technique, 'left', left, { id: 'l', ...changes[1] })]
const SOURCE = 'Buschbacher (from memory); common practice'
const plain = (technique: string, right: Rows, left: Rows) => comparisonLines(assess(studyWith(sides(technique, right, left)), defaultPolicy), `side-difference/${technique}`)

/** 100 x (1 - smaller / larger): formula collection F3.8; the uncertainty of a difference of latencies is 0.1 ms x √2. */
describe('the numbers of the two sides', () => {
  it.each<[technique: string, right: Rows, left: Rows, lines: string[]]>([
    ['median-motor-apb', [['wrist', { latencyMs: 3.5, amplitudeMv: 6 }], ['elbow', { latencyMs: 7.5, distanceMm: 220 }]], [['wrist', { latencyMs: 3.9, amplitudeMv: 8 }], ['elbow', { latencyMs: 8.3, distanceMm: 220 }]], [
      `sideDifferenceMs/latencyMs | latency, side difference 0.4 ± 0.1 ms | 3.5 and 3.9 | ${SOURCE}`,
      `sideDifferencePercent/amplitudeMv | amplitude, side difference 25 % | 6 and 8 | ${SOURCE}`,
      `sideDifferenceMps/velocityMps/forearm | velocity, elbow to wrist, side difference 5 ± 3 m/s | 55 and 50 m/s | ${SOURCE}`,
    ]],
    ['sural', [['calf', { onsetLatencyMs: 3, peakLatencyMs: 3.8, amplitudeUv: 12 }]], [['calf', { onsetLatencyMs: 3.2, peakLatencyMs: 3.9, amplitudeUv: 9 }]], [
      `sideDifferenceMs/onsetLatencyMs | onset latency, side difference 0.2 ± 0.1 ms | 3 and 3.2 | ${SOURCE}`,
      `sideDifferenceMs/peakLatencyMs | peak latency, side difference 0.1 ± 0.1 ms | 3.8 and 3.9 | ${SOURCE}`,
      `sideDifferencePercent/amplitudeUv | amplitude, side difference 25 % | 12 and 9 | ${SOURCE}`,
    ]],
    ['median-mixed-palm', [['palm', { peakLatencyMs: 2 }]], [['palm', { peakLatencyMs: 2.3 }]], [`sideDifferenceMs/peakLatencyMs | peak latency, side difference 0.3 ± 0.1 ms | 2 and 2.3 | ${SOURCE}`]],
    ['tibial-f-ah', [['ankle', { minimumLatencyMs: 48, maximumLatencyMs: 55 }]], [['ankle', { minimumLatencyMs: 51, maximumLatencyMs: 55 }]], [`sideDifferenceMs/minimumLatencyMs | shortest F latency, side difference 3.0 ± 0.1 ms | 48 and 51 | ${SOURCE}`]],
    ['h-reflex-soleus', [['popliteal-fossa', { hLatencyMs: 30, hAmplitudeMv: 2 }]], [['popliteal-fossa', { hLatencyMs: 31.5, hAmplitudeMv: 5 }]], [`sideDifferenceMs/hLatencyMs | H latency, side difference 1.5 ± 0.1 ms | 30 and 31.5 | ${SOURCE}`]],
    ['blink', [['supraorbital', { r1Ms: 11, r2IpsilateralMs: 32, r2ContralateralMs: 33 }]], [['supraorbital', { r1Ms: 12, r2IpsilateralMs: 36, r2ContralateralMs: 33 }]], [
      `sideDifferenceMs/r1Ms | R1, same side, side difference 1.0 ± 0.1 ms | 11 and 12 | ${SOURCE}`,
      `sideDifferenceMs/r2IpsilateralMs | R2, same side, side difference 4.0 ± 0.1 ms | 32 and 36 | ${SOURCE}`,
    ]],
  ])('%s', (technique, right, left, lines) => expect(plain(technique, right, left)).toEqual(lines.map(line => `compare/both/side-difference/${technique}/${line}`)))

  it.each<[name: string, technique: string, right: Rows, left: Rows]>([
    ['one cell blank on the right', 'sural', [['calf', { onsetLatencyMs: 3 }]], [['calf', { onsetLatencyMs: 3, peakLatencyMs: 3.8 }]]],
    ['one cell blank on the left', 'sural', [['calf', { onsetLatencyMs: 3, peakLatencyMs: 3.8 }]], [['calf', { onsetLatencyMs: 3 }]]],
    ['one cell not recordable', 'sural', [['calf', { onsetLatencyMs: 3, peakLatencyMs: 'technical' }]], [['calf', { onsetLatencyMs: 3, peakLatencyMs: 3.8 }]]],
    ['one cell absent, the other not recordable', 'sural', [['calf', { onsetLatencyMs: 3, peakLatencyMs: 'technical' }]], [['calf', { onsetLatencyMs: 3, peakLatencyMs: 'no-response' }]]],
    ['both absent', 'sural', [['calf', { onsetLatencyMs: 3, peakLatencyMs: 'no-response' }]], [['calf', { onsetLatencyMs: 3, peakLatencyMs: 'no-response' }]]],
  ])('%s: no difference of it', (_, technique, right, left) => expect(plain(technique, right, left)).toHaveLength(1))

  it.each<[name: string, right: Values, left: Values]>([
    ['absent on the right', { peakLatencyMs: 'no-response' }, { peakLatencyMs: 3.8 }],
    ['absent on the left', { peakLatencyMs: 3.8 }, { peakLatencyMs: 'no-response' }],
  ])('%s: the difference is an absence', (_, right, left) => {
    const [only] = assess(studyWith(sides('sural', [['calf', right]], [['calf', left]])), defaultPolicy).comparisons
    expect(only?.results.map(result => result.value)).toEqual([{ kind: 'absent', absence: 'no-response' }])
  })

  it.each<[name: string, technique: string, right: Rows, left: Rows]>([
    ['at two sites', 'median-motor-apb', [['wrist', { latencyMs: 3.5 }]], [['elbow', { latencyMs: 7.5 }]]],
    ['trains are not compared', 'repetitive-ulnar-adm', [['rest', { amplitudeMv: 8 }]], [['rest', { amplitudeMv: 7 }]]],
    ['a technique nobody knows', 'unheard-of', [['wrist', { latencyMs: 3.5 }]], [['wrist', { latencyMs: 3.5 }]]],
    ['one velocity alone', 'median-motor-apb', [['palm', { latencyMs: 2 }], ['elbow', { latencyMs: 7.5, distanceMm: 220 }]], [['palm', { durationMs: 4 }], ['elbow', { latencyMs: 7.5, distanceMm: 220 }]]],
  ])('%s: nothing', (_, technique, right, left) => expect(plain(technique, right, left)).toEqual([]))
})

describe('velocities of the two sides', () => {
  const arm = (...segments: [site: string, latencyMs: number, distanceMm: number][]): Rows => [['wrist', { latencyMs: 3 }], ...segments.map(([site, latencyMs, distanceMm]): [string, Values] => [site, { latencyMs, distanceMm }])]
  const velocities = (right: Rows, left: Rows) => plain('ulnar-motor-adm', right, left).filter(line => line.includes('velocityMps')).map(line => line.split(' | ')[1])
  it.each([
    ['segment by segment', arm(['below-elbow', 7, 200], ['above-elbow', 9, 100]), arm(['below-elbow', 8, 200], ['above-elbow', 10.5, 100]), ['velocity, below elbow to wrist, side difference 10 ± 3 m/s', 'velocity across the elbow, side difference 10 ± 5 m/s']],
    ['only segments of both', arm(['below-elbow', 7, 200], ['above-elbow', 9, 100]), arm(['below-elbow', 8, 200]), ['velocity, below elbow to wrist, side difference 10 ± 3 m/s']],
    ['other segments are not alike', arm(['below-elbow', 7, 200]), arm(['above-elbow', 8, 300]), []],
    ['one without a number on the left', arm(['below-elbow', 7, 200]), arm(['below-elbow', 2, 200]), []],
    ['one without a number on the right', arm(['below-elbow', 2, 200]), arm(['below-elbow', 7, 200]), []],
  ])('%s', (_, right, left, lines) => expect(velocities(right, left)).toEqual(lines))
})

/** Invented limits for every measure that is shown only where a set has one. */
const limits: [technique: string, quantity: string, at: string, value: number, unit: string][] = [
  ['median-motor-apb', 'sideDifferencePercent', 'latencyMs', 20, '%'], ['median-motor-apb', 'sideDifferenceMv', 'amplitudeMv', 3, 'mV'], ['median-motor-apb', 'sideDifferencePercent', 'velocityMps', 10, '%'],
  ['sural', 'sideDifferenceUv', 'amplitudeUv', 5, 'µV'], ['sural', 'sideDifferenceMs', 'onsetLatencyMs', 0.5, 'ms'], ['median-mixed-palm', 'sideDifferenceUv', 'amplitudeUv', 5, 'µV'], ['h-reflex-soleus', 'sideRatio', 'hAmplitudeMv', 0.5, ''],
]
const table = tableOf(limits.map(([technique, quantity, at, value, unit], index) =>
  limitRow({ id: `row-${index}`, technique: `side-difference/${technique}`, quantity, at, unit, value, bound: quantity === 'sideRatio' ? 'lower' : 'upper', percentile: quantity === 'sideRatio' ? 3 : 97, distanceMm: null, direction: null, amplitudeDefinition: null })))
const limited = (runs: Run[], tables = [table]): Assessment => assessStudy(studyWith(runs), tables, { ...defaultPolicy, adopted: tables.map(one => adopt(one)) })
const judged = (assessment: Assessment) => assessment.comparisons.filter(one => one.side === undefined).flatMap(one => one.results.map(result => [resultLine(result).split(' | ')[1], verdictLine(result.verdict)]))

describe('what is shown only where the set in use has a limit', () => {
  it.each<[technique: string, right: Rows, left: Rows, lines: [string, string][]]>([
    ['median-motor-apb', [['wrist', { latencyMs: 4, amplitudeMv: 6 }], ['elbow', { latencyMs: 8, distanceMm: 220 }]], [['wrist', { latencyMs: 3, amplitudeMv: 9.1 }], ['elbow', { latencyMs: 7.4, distanceMm: 220 }]], [
      ['latency, side difference 1.0 ± 0.1 ms', 'no-limit: the adopted sets have none for it'], ['latency, side difference 25 %', 'outside ≤ 20, above'],
      ['amplitude, side difference 34 %', 'no-limit: the adopted sets have none for it'], ['amplitude, side difference 3.1 mV', 'outside ≤ 3, above'],
      ['velocity, elbow to wrist, side difference 5 ± 3 m/s', 'no-limit: the adopted sets have none for it'], ['velocity, elbow to wrist, side difference 9 %', 'within ≤ 10'],
    ]],
    ['median-mixed-palm', [['palm', { amplitudeUv: 12 }]], [['palm', { amplitudeUv: 7 }]], [['amplitude, side difference 42 %', 'no-limit: the adopted sets have none for it'], ['amplitude, side difference 5.0 µV', 'within ≤ 5']]],
    ['h-reflex-soleus', [['popliteal-fossa', { hAmplitudeMv: 2 }]], [['popliteal-fossa', { hAmplitudeMv: 5 }]], [['H amplitude, smaller over larger side 0.40', 'outside ≥ 0.5, below']]],
  ])('%s', (technique, right, left, lines) => expect(judged(limited(sides(technique, right, left)))).toEqual(lines))
})

describe('sides recorded in two ways are not judged', () => {
  const sural = (right: Values, left: Values, changes?: [Partial<Run>, Partial<Run>]) => judged(limited(sides('sural', [['calf', { onsetLatencyMs: 3, ...right }]], [['calf', { onsetLatencyMs: 3.6, ...left }]], changes)))
  const ways = 'no-limit: the sides were recorded in two ways'
  it.each<[name: string, right: Values, left: Values, verdict: string, changes?: [Partial<Run>, Partial<Run>]]>([
    ['one way', {}, {}, 'outside ≤ 0.5, above, near'],
    ['the same distance', { distanceMm: 140 }, { distanceMm: 140 }, 'outside ≤ 0.5, above, near'],
    ['two distances', { distanceMm: 140 }, { distanceMm: 120 }, 'no-limit: recorded over 140 mm and 120 mm'],
    ['one distance not given', { distanceMm: 140 }, {}, 'outside ≤ 0.5, above, near'],
    ['two directions', {}, {}, ways, [{ direction: 'orthodromic' }, {}]],
    ['the usual direction said on one side', {}, {}, 'outside ≤ 0.5, above, near', [{}, { direction: 'antidromic' }]],
    ['two measures of amplitude', {}, {}, ways, [{}, { amplitudeDefinition: 'peak-to-peak' }]],
    ['the usual measure said on one side', {}, {}, 'outside ≤ 0.5, above, near', [{ amplitudeDefinition: 'onset-to-peak' }, {}]],
  ])('%s', (_, right, left, verdict, changes) => expect(sural(right, left, changes)[0]).toEqual(['onset latency, side difference 0.6 ± 0.1 ms', verdict]))
})

/** A limit for orthodromic recording over 140 mm, peak to peak: it is asked for as the sides were recorded. */
describe('the limit is asked for as both sides were recorded', () => {
  const strict = tableOf([limitRow({ technique: 'side-difference/sural', quantity: 'sideDifferenceMs', at: 'onsetLatencyMs', value: 0.5, percentile: 97, distanceMm: 140, direction: 'orthodromic', amplitudeDefinition: null })])
  const of = (distances: [number | undefined, number | undefined], direction?: 'orthodromic') => {
    const at = (distanceMm: number | undefined, onsetLatencyMs: number): Rows => [['calf', { onsetLatencyMs, ...(distanceMm !== undefined && { distanceMm }) }]]
    return judged(limited(sides('sural', at(distances[0], 3), at(distances[1], 3.2), [{ direction }, { direction }]), [strict]))[0]?.[1]
  }
  it.each<[name: string, distances: [number | undefined, number | undefined], direction: 'orthodromic' | undefined, verdict: string]>([
    ['as the limit has it', [140, 140], 'orthodromic', 'within ≤ 0.5'],
    ['in the usual direction', [140, 140], undefined, 'no-limit: the set\'s limit is for orthodromic recording'],
    ['over another distance', [120, 120], 'orthodromic', 'no-limit: distance 120 mm is not the set\'s 140 mm'],
    ['distance of one side not given', [140, undefined], 'orthodromic', 'not-judged: distance missing'],
    ['distances not given', [undefined, undefined], 'orthodromic', 'not-judged: distance missing'],
  ])('%s', (_, distances, direction, verdict) => expect(of(distances, direction)).toBe(verdict))
})

describe('order, titles and cold', () => {
  it('in the order of the catalogue, with their runs', () => {
    const runs = ['sural', 'ulnar-motor-adm', 'median-motor-apb'].flatMap((technique, index) => sides(technique, [[technique === 'sural' ? 'calf' : 'wrist', { latencyMs: 3, peakLatencyMs: 4 }]], [[technique === 'sural' ? 'calf' : 'wrist', { latencyMs: 3, peakLatencyMs: 4 }]], [{ id: `r${index}` }, { id: `l${index}` }]))
    const pairs = assess(studyWith(runs), defaultPolicy).comparisons.filter(one => one.side === undefined)
    expect(pairs.map(({ title, runIds }) => [title, runIds])).toEqual([
      ['median motor, abductor pollicis brevis, RIGHT against LEFT', ['r2', 'l2']],
      ['ulnar motor, abductor digiti minimi, RIGHT against LEFT', ['r1', 'l1']],
      ['sural sensory, RIGHT against LEFT', ['r0', 'l0']],
    ])
  })
  it('one cold side may hide a difference', () => {
    const cold = { temperatures: [{ id: 'a', segment: 'foot' as const, side: 'right' as const, celsius: 25, warmed: false }, { id: 'b', segment: 'foot' as const, side: 'left' as const, celsius: 33, warmed: false }] }
    const runs = sides('sural', [['calf', { onsetLatencyMs: 3 }]], [['calf', { onsetLatencyMs: 3.2 }]])
    const [one] = assessStudy(studyWith(runs, cold), [table], { ...defaultPolicy, adopted: [adopt(table)] }).comparisons
    expect(verdictLine(one!.results[0]!.verdict)).toBe('cold ≤ 0.5: may be masked by cold: RIGHT foot 25.0 °C, below 30 °C')
  })
})
