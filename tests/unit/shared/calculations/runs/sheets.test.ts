import { describe, expect, it } from 'vitest'
import { assessStudy } from '#shared/calculations/assess-study'
import { defaultPolicy, type Policy } from '#shared/calculations/types'
import type { Run, RunRow, Study } from '#shared/schemas/study'
import { ndtfPolicy } from '../../../../fixtures/carpal-tunnel-study'
import { adopt, limitRow, tableOf } from '../limit-fixtures'
import { resultLine, runLines, verdictLine } from '../result-lines'
import { assess, policyWith, run, studyWith } from '../study-maker'

type Values = RunRow['values']
type Rows = [site: string, values: Values, series?: RunRow['series']][]
/** All results of one run with the id r, in order, each without "r/r-". */
const sheet = (technique: string, rows: Rows, { policy = ndtfPolicy, changes = {}, study = {}, others = [] }: { policy?: Policy, changes?: Partial<Run>, study?: Partial<Study>, others?: Run[] } = {}) =>
  runLines(assess(studyWith([run(technique, 'right', rows, { id: 'r', ...changes }), ...others], study), policy), 'r').map(line => line.replace(/^r\/r-/, ''))
const verdicts = (technique: string, rows: Rows, policy: Policy = ndtfPolicy, changes: Partial<Run> = {}) =>
  Object.fromEntries(assess(studyWith([run(technique, 'right', rows, { id: 'r', ...changes })]), policy).runs[0]!.results.map(result => [result.key.replace(/^r\/r-/, ''), verdictLine(result.verdict)]))

const VELOCITY = 'Mallik and Weir, J Neurol Neurosurg Psychiatry 2005;76(Suppl 2):ii23-ii31; uncertainty by JCGM 100, k = 2'
const CHANGE = 'negative-peak measures, EFNS/PNS criteria (PMC8108415, table 2)'
const DROP = 'Buschbacher, Am J Phys Med Rehabil 1999;78(S):S9-S14'
const INDEX = 'Kang et al., J Korean Neurol Assoc 2004;22:609-612'
const RESIDUAL = 'Khosrawi and Dehghan, J Res Med Sci 2013;18:934-938'

/**
 * 200 mm in 4 ms are 50 m/s, 100 mm in 2.5 ms 40 m/s; 50 x √((5/200)² + 2 (0.1/4)²) = 2.2; falls and rises by F5 of the
 * formula collection, index 80/(50 x 2.9) and residual latency 2.9 - 80/50 by F3.1 and F3.2.
 */
const ulnar: Rows = [
  ['wrist', { latencyMs: 2.9, amplitudeMv: 10, durationMs: 5, areaMvMs: 20, distanceMm: 80, stimulusMa: 30 }],
  ['below-elbow', { latencyMs: 6.9, amplitudeMv: 9, durationMs: 5.5, areaMvMs: 18, distanceMm: 200 }],
  ['above-elbow', { latencyMs: 9.4, amplitudeMv: 6.3, durationMs: 6, areaMvMs: 15, distanceMm: 100 }],
]

describe('a motor run', () => {
  it('has every number with its unit, formula and source', () => {
    expect(sheet('ulnar-motor-adm', ulnar)).toEqual([
      '0/latencyMs | latency at wrist 2.9 ms', '0/amplitudeMv | amplitude at wrist 10.0 mV', '0/durationMs | duration at wrist 5.0 ms', '0/areaMvMs | area at wrist 20.0 mV·ms', '0/distanceMm | distance at wrist 80 mm', '0/stimulusMa | stimulus at wrist 30.0 mA',
      '1/latencyMs | latency at below elbow 6.9 ms', '1/amplitudeMv | amplitude at below elbow 9.0 mV', '1/durationMs | duration at below elbow 5.5 ms', '1/areaMvMs | area at below elbow 18.0 mV·ms', '1/distanceMm | distance at below elbow 200 mm',
      `1/velocityMps | velocity, below elbow to wrist 50 ± 2 m/s | 200 mm / (6.9 ms - 2.9 ms) | ${VELOCITY}`,
      `1/amplitudeFallPercent | amplitude fall, wrist to below elbow 10 % | from 10 to 9 | ${CHANGE}`,
      `1/areaFallPercent | area fall, wrist to below elbow 10 % | from 20 to 18 | ${CHANGE}`,
      `1/durationRisePercent | duration rise, wrist to below elbow 10 % | from 5 to 5.5 | ${CHANGE}`,
      `0/terminalLatencyIndex | terminal latency index 0.55 | 80 mm, 50.0 m/s, 2.9 ms | ${INDEX}`,
      `0/residualLatencyMs | residual latency 1.3 ± 0.2 ms | 80 mm, 50.0 m/s, 2.9 ms | ${RESIDUAL}`,
      '2/latencyMs | latency at above elbow 9.4 ms', '2/amplitudeMv | amplitude at above elbow 6.3 mV', '2/durationMs | duration at above elbow 6.0 ms', '2/areaMvMs | area at above elbow 15.0 mV·ms', '2/distanceMm | distance at above elbow 100 mm',
      `2/velocityMps | velocity across the elbow 40 ± 3 m/s | 100 mm / (9.4 ms - 6.9 ms) | ${VELOCITY}`,
      `2/velocityDropMps | velocity drop across the elbow 10 ± 4 m/s | 50.0 m/s against 40.0 m/s | ${DROP}`,
      `2/velocityDropPercent | relative velocity drop across the elbow 20 % | 50.0 m/s against 40.0 m/s | ${DROP}`,
      `2/amplitudeFallPercent | amplitude fall, below elbow to above elbow 30 % | from 9 to 6.3 | ${CHANGE}`,
      `2/amplitudeFallFromDistalPercent | amplitude fall, wrist to above elbow 37 % | from 10 to 6.3 | ${CHANGE}`,
      `2/areaFallPercent | area fall, below elbow to above elbow 17 % | from 18 to 15 | ${CHANGE}`,
      `2/areaFallFromDistalPercent | area fall, wrist to above elbow 25 % | from 20 to 15 | ${CHANGE}`,
      `2/durationRisePercent | duration rise, below elbow to above elbow 9 % | from 5.5 to 6 | ${CHANGE}`,
      `2/durationRiseFromDistalPercent | duration rise, wrist to above elbow 20 % | from 5 to 6 | ${CHANGE}`,
    ])
  })
  it('judges only what the set has a limit for, at the place it is for', () => {
    const none = 'none'
    expect(verdicts('ulnar-motor-adm', ulnar)).toEqual({
      '0/latencyMs': 'within ≤ 3.7', '0/amplitudeMv': 'within ≥ 7.9', '0/durationMs': none, '0/areaMvMs': none, '0/distanceMm': none, '0/stimulusMa': none, '0/terminalLatencyIndex': none, '0/residualLatencyMs': none,
      '1/latencyMs': none, '1/amplitudeMv': none, '1/durationMs': none, '1/areaMvMs': none, '1/distanceMm': none, '1/velocityMps': 'outside ≥ 52, below, near', '1/amplitudeFallPercent': none, '1/areaFallPercent': none, '1/durationRisePercent': none,
      '2/latencyMs': none, '2/amplitudeMv': none, '2/durationMs': none, '2/areaMvMs': none, '2/distanceMm': none, '2/velocityMps': 'outside ≥ 43, below, near', '2/velocityDropMps': 'within ≤ 15', '2/velocityDropPercent': 'within ≤ 23',
      '2/amplitudeFallPercent': none, '2/amplitudeFallFromDistalPercent': none, '2/areaFallPercent': none, '2/areaFallFromDistalPercent': none, '2/durationRisePercent': none, '2/durationRiseFromDistalPercent': none,
    })
  })
  it('without a set, says so where it matters', () => {
    const said = Object.entries(verdicts('ulnar-motor-adm', ulnar, defaultPolicy)).filter(([, verdict]) => verdict !== 'none')
    expect(said).toEqual(['0/latencyMs', '0/amplitudeMv', '1/velocityMps', '2/velocityMps'].map(key => [key, 'no-limit: no set adopted here']))
  })

  const from = (technique: string, rows: Rows, words: string, options: Parameters<typeof sheet>[2] = {}) => sheet(technique, rows, options).filter(line => line.split(' | ')[0]!.includes(words))
  it.each<[name: string, rows: Rows, lines: string[]]>([
    ['latency blank below', [['wrist', { amplitudeMv: 8 }], ['elbow', { latencyMs: 8, distanceMm: 220 }]], ['latency missing at wrist']],
    ['latency blank above', [['wrist', { latencyMs: 4 }], ['elbow', { amplitudeMv: 8, distanceMm: 220 }]], ['latency missing at elbow']],
    ['distance blank', [['wrist', { latencyMs: 4 }], ['elbow', { latencyMs: 8 }]], ['distance missing at elbow']],
    ['not recordable below', [['wrist', { latencyMs: 'technical' }], ['elbow', { latencyMs: 8, distanceMm: 220 }]], ['not recordable at wrist']],
    ['no response above', [['wrist', { latencyMs: 4 }], ['elbow', { latencyMs: 'no-response', distanceMm: 220 }]], ['no response at elbow']],
    ['distance not done', [['wrist', { latencyMs: 4 }], ['elbow', { latencyMs: 8, distanceMm: 'not-done' }]], ['not done at elbow']],
    ['stopped', [['wrist', { latencyMs: 4 }], ['elbow', { latencyMs: 'stopped' }]], ['stopped at elbow']],
  ])('%s: the velocity says what is missing', (_, rows, [because]) => expect(from('median-motor-apb', rows, 'velocity')).toEqual([`1/velocityMps | velocity, elbow to wrist not computable | ${because}`]))

  it.each<[name: string, rows: Rows, keys: string[]]>([
    ['nothing typed above but the way', [['wrist', { latencyMs: 4, amplitudeMv: 8 }], ['elbow', { distanceMm: 220 }]], []],
    ['a site that stands twice', [['wrist', { latencyMs: 4, amplitudeMv: 8 }], ['wrist', { latencyMs: 5, amplitudeMv: 7 }]], []],
    ['amplitudes alone', [['wrist', { amplitudeMv: 8 }], ['elbow', { amplitudeMv: 4 }]], ['1/velocityMps', '1/amplitudeFallPercent']],
    ['no amplitude below', [['wrist', { latencyMs: 4 }], ['elbow', { latencyMs: 8, amplitudeMv: 4, distanceMm: 200 }]], ['1/velocityMps']],
    ['not recordable above', [['wrist', { amplitudeMv: 8 }], ['elbow', { amplitudeMv: 'technical' }]], ['1/velocityMps']],
    ['lost above', [['wrist', { amplitudeMv: 8 }], ['elbow', { amplitudeMv: 'no-response' }]], ['1/velocityMps', '1/amplitudeFallPercent']],
    ['the way to the muscle not known: no index', [['wrist', { latencyMs: 4 }], ['elbow', { latencyMs: 8, distanceMm: 200 }]], ['1/velocityMps']],
    ['the way to the muscle known', [['wrist', { latencyMs: 4, distanceMm: 80 }], ['elbow', { latencyMs: 8, distanceMm: 200 }]], ['1/velocityMps', '0/terminalLatencyIndex', '0/residualLatencyMs']],
    ['index only from the wrist', [['elbow', { latencyMs: 8, distanceMm: 200 }], ['axilla', { latencyMs: 11, distanceMm: 150 }]], ['1/velocityMps', '0/terminalLatencyIndex', '0/residualLatencyMs']],
    ['three sites, index once', [['wrist', { latencyMs: 4, distanceMm: 80 }], ['elbow', { latencyMs: 8, distanceMm: 200 }], ['axilla', { latencyMs: 11, distanceMm: 150 }]], ['1/velocityMps', '0/terminalLatencyIndex', '0/residualLatencyMs', '2/velocityMps']],
  ])('%s', (_, rows, keys) => {
    const typed = new Set(['latencyMs', 'amplitudeMv', 'durationMs', 'areaMvMs', 'distanceMm', 'stimulusMa'])
    expect(sheet('median-motor-apb', rows).map(line => line.split(' | ')[0]!).filter(key => !typed.has(key.slice(2)))).toEqual(keys)
  })

  it('a lost response is told as lost, without a formula', () => {
    expect(from('median-motor-apb', [['wrist', { amplitudeMv: 8 }], ['elbow', { amplitudeMv: 'no-response' }]], 'Fall')).toEqual(['1/amplitudeFallPercent | amplitude fall, wrist to elbow no response'])
  })
  it('the palm keeps the distal numbers at the wrist, over the whole way', () => {
    const rows: Rows = [['palm', { latencyMs: 1.8, distanceMm: 60 }], ['wrist', { latencyMs: 3.3, distanceMm: 20 }], ['elbow', { latencyMs: 7.3, distanceMm: 200 }]]
    expect(verdicts('median-motor-apb', rows)).toMatchObject({ '0/latencyMs': 'none', '1/latencyMs': 'within ≤ 4.4', '2/latencyMs': 'none' })
    expect(from('median-motor-apb', rows, 'terminal')).toEqual([`1/terminalLatencyIndex | terminal latency index 0.48 | 80 mm, 50.0 m/s, 3.3 ms | ${INDEX}`])
  })
  it('a drop is told where nerves are caught, against the segment before', () => {
    expect(from('fibular-motor-edb', [['ankle', { latencyMs: 5, distanceMm: 80 }], ['below-fibular-head', { latencyMs: 12, distanceMm: 350 }], ['above-fibular-head', { latencyMs: 14.5, distanceMm: 100 }]], 'Drop')).toEqual([
      `2/velocityDropMps | velocity drop across the fibular head 10 ± 4 m/s | 50.0 m/s against 40.0 m/s | ${DROP}`, `2/velocityDropPercent | relative velocity drop across the fibular head 20 % | 50.0 m/s against 40.0 m/s | ${DROP}`,
    ])
    expect(from('median-motor-apb', [['wrist', { latencyMs: 4 }], ['elbow', { latencyMs: 8, distanceMm: 200 }], ['axilla', { latencyMs: 11, distanceMm: 120 }]], 'Drop')).toEqual([])
    expect(from('ulnar-motor-adm', [['wrist', { latencyMs: 3 }], ['below-elbow', { latencyMs: 7 }], ['above-elbow', { latencyMs: 9, distanceMm: 100 }]], 'Drop')).toEqual([])
  })
  it('sites that are no neighbours have both names', () => {
    const rows: Rows = [['wrist', { latencyMs: 3 }], ['above-elbow', { latencyMs: 9, distanceMm: 300 }]]
    expect(from('ulnar-motor-adm', rows, 'velocity')).toEqual([`1/velocityMps | velocity, above elbow to wrist 50 ± 1 m/s | 300 mm / (9 ms - 3 ms) | ${VELOCITY}`])
    expect(assess(studyWith([run('ulnar-motor-adm', 'right', rows)])).runs[0]!.results.find(result => result.quantity === 'velocityMps')?.at).toBe('wrist-above-elbow')
  })
  it('the time over a declared short segment', () => {
    const steps: Rows = [['elbow-minus-4', { latencyMs: 6 }], ['elbow-minus-2', { latencyMs: 6.5, distanceMm: 20 }]]
    const step = '1/stepLatencyMs | latency step, 2 cm below the epicondyle to 4 cm below the epicondyle 0.50 ± 0.14 ms | latency here - latency at the step before | arithmetic'
    expect(from('ulnar-motor-adm-short', steps, 'step')).toEqual([step])
    expect(from('ulnar-motor-adm', [['below-elbow', { latencyMs: 6 }], ['above-elbow', { latencyMs: 6.5, distanceMm: 20 }]], 'step', { changes: { shortSegments: true } })).toHaveLength(1)
    expect(from('ulnar-motor-adm', [['below-elbow', { latencyMs: 6 }], ['above-elbow', { latencyMs: 6.5, distanceMm: 20 }]], 'step')).toEqual([])
  })
  it('beside the line: what was typed, never judged', () => {
    const rows: Rows = [['wrist', { latencyMs: 3, amplitudeMv: 10 }], ['median-elbow', { latencyMs: 6, amplitudeMv: 3, distanceMm: 280 }]]
    expect(sheet('ulnar-motor-adm', rows).slice(2)).toEqual(['1/latencyMs | latency, median nerve at the elbow 6.0 ms', '1/amplitudeMv | amplitude, median nerve at the elbow 3.0 mV', '1/distanceMm | distance, median nerve at the elbow 280 mm'])
    expect(Object.values(verdicts('ulnar-motor-adm', rows)).slice(2)).toEqual(['none', 'none', 'none'])
  })
})

/** 140 mm in 2.8 ms are 50 m/s ± 50 √((5/140)² + (0.1/2.8)²) = 2.5; 70 mm in 1.4 ms between the two sites. */
describe('a sensory run', () => {
  const SOURCE = 'distance over onset latency: common practice; uncertainty by JCGM 100, k = 2'
  it('of one site', () => {
    expect(sheet('median-sensory-d2', [['wrist', { onsetLatencyMs: 2.8, peakLatencyMs: 3.5, amplitudeUv: 20.4, durationMs: 1.5, distanceMm: 140, stimulusMa: 20 }]])).toEqual([
      '0/onsetLatencyMs | onset latency 2.8 ms', '0/peakLatencyMs | peak latency 3.5 ms', '0/amplitudeUv | amplitude 20 µV', '0/durationMs | duration 1.5 ms', '0/distanceMm | distance 140 mm', '0/stimulusMa | stimulus 20.0 mA',
      `0/velocityMps | velocity 50 ± 3 m/s | 140 mm / 2.8 ms | ${SOURCE}`,
    ])
  })
  it('of two sites, with the segment between', () => {
    expect(sheet('median-sensory-d2', [['palm', { onsetLatencyMs: 1.4, distanceMm: 70 }], ['wrist', { onsetLatencyMs: 3, amplitudeUv: 9.44, distanceMm: 140 }]])).toEqual([
      '0/onsetLatencyMs | onset latency at palm 1.4 ms', '0/distanceMm | distance at palm 70 mm', `0/velocityMps | velocity, palm 50 ± 5 m/s | 70 mm / 1.4 ms | ${SOURCE}`,
      '1/onsetLatencyMs | onset latency at wrist 3.0 ms', '1/amplitudeUv | amplitude at wrist 9.4 µV', '1/distanceMm | distance at wrist 140 mm', `1/velocityMps | velocity, wrist 47 ± 2 m/s | 140 mm / 3 ms | ${SOURCE}`,
      `1/segmentVelocityMps | velocity, wrist to palm 44 ± 6 m/s | (140 - 70) mm / (3 - 1.4) ms | ${SOURCE}`,
    ])
  })
  it.each<[name: string, values: Values, because: string]>([
    ['distance blank', { onsetLatencyMs: 2.8 }, 'distance missing'],
    ['distance not measured', { onsetLatencyMs: 2.8, distanceMm: 'not-done' }, 'distance missing'],
    ['onset blank, peak there', { peakLatencyMs: 3.5, distanceMm: 140 }, 'onset latency missing'],
    ['onset blank, amplitude there', { amplitudeUv: 20, distanceMm: 140 }, 'onset latency missing'],
    ['no response', { onsetLatencyMs: 'no-response', distanceMm: 140 }, 'no response'],
    ['not recordable', { onsetLatencyMs: 'technical', distanceMm: 140 }, 'not recordable'],
  ])('%s: the velocity says so', (_, values, because) => expect(sheet('sural', [['calf', values]]).filter(line => line.includes('velocity'))).toEqual([`0/velocityMps | velocity not computable | ${because}`]))
  it('a way alone begins nothing', () => expect(sheet('sural', [['calf', { distanceMm: 140 }]])).toEqual(['0/distanceMm | distance 140 mm']))
  it.each<[name: string, palm: Values, wrist: Values]>([
    ['a way is missing below', { onsetLatencyMs: 1.4 }, { onsetLatencyMs: 2.8, distanceMm: 140 }],
    ['a way is missing above', { onsetLatencyMs: 1.4, distanceMm: 70 }, { onsetLatencyMs: 2.8 }],
    ['a latency is missing below', { distanceMm: 70 }, { onsetLatencyMs: 2.8, distanceMm: 140 }],
    ['a latency is missing above', { onsetLatencyMs: 1.4, distanceMm: 70 }, { distanceMm: 140 }],
  ])('no segment where %s', (_, palm, wrist) => expect(sheet('median-sensory-d2', [['palm', palm], ['wrist', wrist]]).filter(line => line.includes('segment'))).toEqual([]))
  it('no segment of a site with itself', () => expect(sheet('median-sensory-d2', [['wrist', { onsetLatencyMs: 2.8, distanceMm: 140 }], ['wrist', { onsetLatencyMs: 3, distanceMm: 150 }]]).filter(line => line.includes('segment'))).toEqual([]))
  it('segments by their place: neighbours have the catalogue\'s, others both names', () => {
    const at = (rows: Rows) => assess(studyWith([run('ulnar-sensory-d5', 'right', rows)])).runs[0]!.results.filter(result => result.quantity === 'segmentVelocityMps').map(result => result.at)
    const [palm, wrist, above]: Rows = [['palm', { onsetLatencyMs: 1.4, distanceMm: 70 }], ['wrist', { onsetLatencyMs: 2.8, distanceMm: 140 }], ['above-elbow', { onsetLatencyMs: 9, distanceMm: 440 }]]
    expect(at([palm!, wrist!, above!])).toEqual(['wrist-palm', 'wrist-above-elbow'])
  })
  it('is judged over its own way, and a velocity by the onset that stands for it', () => {
    expect(verdicts('median-sensory-d2', [['palm', { onsetLatencyMs: 1.5, distanceMm: 70 }], ['wrist', { onsetLatencyMs: 3.4, peakLatencyMs: 4, durationMs: 1.5, distanceMm: 140 }]])).toEqual({
      '0/onsetLatencyMs': 'within ≤ 1.6', '0/distanceMm': 'none', '0/velocityMps': expect.stringMatching(/^no-limit: its limit comes from onset latency 1.6 ms at 70 mm/),
      '1/onsetLatencyMs': 'outside ≤ 3.3, above', '1/peakLatencyMs': 'within ≤ 4, near', '1/durationMs': 'none', '1/distanceMm': 'none', '1/velocityMps': expect.stringMatching(/^no-limit: its limit comes from onset latency 3.3 ms at 140 mm/), '1/segmentVelocityMps': 'none',
    })
  })
})

const WAVE = 'Kimura, from memory'
const GROPPA = 'Groppa et al., Clin Neurophysiol 2012;123:858-882'
const FISHER = 'Fisher MA (secondary source)'
const NOTES = 'textbook-derived study notes (read)'
/** Ulnar nerve 50 m/s, M 3 ms, F 27 to 29 ms, 575 mm: formulas F1.4 and F3.3 to F3.6 of the collection. */
describe('a run of F-waves', () => {
  const motor = run('ulnar-motor-adm', 'right', [['wrist', { latencyMs: 3 }], ['below-elbow', { latencyMs: 7, distanceMm: 200 }]], { id: 'm' })
  it('with typed numbers and the motor run of the nerve', () => {
    expect(sheet('ulnar-f-adm', [['wrist', { stimulusCount: 20, responseCount: 18, minimumLatencyMs: 27, meanLatencyMs: 28, maximumLatencyMs: 29, limbLengthMm: 575 }]], { others: [motor] })).toEqual([
      '0/stimulusCount | stimuli 20', '0/responseCount | responses 18', '0/minimumLatencyMs | shortest F latency 27.0 ms', '0/meanLatencyMs | mean F latency 28.0 ms', '0/maximumLatencyMs | longest F latency 29.0 ms', '0/limbLengthMm | stimulus to spine 575 mm',
      '0/persistencePercent | persistence 90 % | 18 of 20 | definition',
      `0/chronodispersionMs | chronodispersion 2.0 ± 0.1 ms | 29 ms - 27 ms, 18 responses | ${FISHER}`,
      `0/fRatio | F ratio 3.83 | F 27 ms, M 3 ms | ${WAVE}`,
      `0/peripheralLatencyMs | peripheral motor latency 14.5 ms | F 27 ms, M 3 ms | ${GROPPA}`,
      '0/fVelocityMps | F-wave velocity 50 ± 1 m/s | F 27 ms, M 3 ms, 575 mm | Kimura 1974, from memory',
      `0/fEstimateMs | F estimate 27.0 ms | 575 mm, motor velocity of the same nerve, M 3 ms | ${NOTES}`,
      `0/fEstimateDifferenceMs | shortest F minus estimate 0.0 ms | 575 mm, motor velocity of the same nerve, M 3 ms | ${NOTES}`,
    ])
  })
  it('with single responses and its own M latency', () => {
    expect(sheet('ulnar-f-adm', [['wrist', { mLatencyMs: 4 }, [27, 'no-response', 30]]], { others: [motor] })).toEqual([
      '0/mLatencyMs | M latency 4.0 ms',
      '0/minimumLatencyMs | shortest F latency 27.0 ± 0.1 ms | from 3 recorded responses | arithmetic',
      '0/meanLatencyMs | mean F latency 28.5 ± 0.1 ms | from 3 recorded responses | arithmetic',
      '0/maximumLatencyMs | longest F latency 30.0 ± 0.1 ms | from 3 recorded responses | arithmetic',
      '0/persistencePercent | persistence 67 % | 2 of 3 | definition',
      '0/chronodispersionMs | chronodispersion not computable | fewer than 10 responses',
      `0/fRatio | F ratio 2.75 | F 27 ms, M 4 ms | ${WAVE}`,
      `0/peripheralLatencyMs | peripheral motor latency 15.0 ms | F 27 ms, M 4 ms | ${GROPPA}`,
    ])
  })
  const keys = (values: Values, series?: RunRow['series'], others: Run[] = []) => sheet('ulnar-f-adm', [['wrist', values, series]], { others }).map(line => line.split(' | ')[0]!.slice(2))
  it.each<[name: string, values: Values, series: RunRow['series'], others: Run[], computed: string[]]>([
    ['shortest alone', { minimumLatencyMs: 27 }, undefined, [], []],
    ['with a motor run that has no velocity', { minimumLatencyMs: 27, limbLengthMm: 575 }, undefined, [run('ulnar-motor-adm', 'right', [['wrist', { latencyMs: 3 }]], { id: 'm' })], ['fRatio', 'peripheralLatencyMs', 'fVelocityMps']],
    ['with a motor run of the other side', { minimumLatencyMs: 27, limbLengthMm: 575 }, undefined, [{ ...motor, side: 'left' }], []],
    ['with a motor run of another nerve', { minimumLatencyMs: 27, limbLengthMm: 575 }, undefined, [{ ...motor, technique: 'median-motor-apb' }], []],
    ['no F: the estimate alone', { minimumLatencyMs: 'no-response', limbLengthMm: 575 }, undefined, [motor], ['fEstimateMs']],
    ['the way not measured', { minimumLatencyMs: 27, limbLengthMm: 'not-done' }, undefined, [motor], ['fRatio', 'peripheralLatencyMs']],
    ['M not recordable: the motor run has it', { minimumLatencyMs: 27, mLatencyMs: 'technical' }, undefined, [motor], ['fRatio', 'peripheralLatencyMs']],
    ['typed before counted', { minimumLatencyMs: 27, responseCount: 9 }, [26, 28], [], ['meanLatencyMs', 'maximumLatencyMs', 'persistencePercent', 'chronodispersionMs']],
    ['an empty series', {}, [], [], []],
  ])('%s', (_, values, series, others, computed) => expect(keys(values, series, others).filter(key => !(key in values))).toEqual(computed))
  it('is judged by its shortest latency; the others stand beside it', () => {
    expect(verdicts('median-f-apb', [['wrist', { minimumLatencyMs: 31.1, meanLatencyMs: 33, mLatencyMs: 3.5, stimulusCount: 20, responseCount: 20 }]], policyWith('preston-shapiro-adult'))).toEqual({
      '0/stimulusCount': 'none', '0/responseCount': 'none', '0/minimumLatencyMs': 'outside ≤ 31, above', '0/meanLatencyMs': 'none', '0/mLatencyMs': 'none', '0/persistencePercent': 'none', '0/fRatio': 'none', '0/peripheralLatencyMs': 'none',
    })
    expect(verdicts('median-f-apb', [['wrist', { meanLatencyMs: 33 }, [31.2]]], policyWith('preston-shapiro-adult'))).toMatchObject({ '0/minimumLatencyMs': 'outside ≤ 31, above', '0/maximumLatencyMs': 'none' })
    expect(verdicts('median-f-apb', [['wrist', { minimumLatencyMs: 31 }]], defaultPolicy)).toEqual({ '0/minimumLatencyMs': 'no-limit: no set adopted here' })
  })
})

/** 9.14 + 0.46 x 40 cm + 0.1 x 52 years = 32.74 ms: Braddom and Johnson, from memory. */
describe('reflexes', () => {
  it('H-reflex', () => {
    expect(sheet('h-reflex-soleus', [['popliteal-fossa', { mLatencyMs: 5, hLatencyMs: 31, mAmplitudeMv: 12, hAmplitudeMv: 3, legLengthMm: 400 }]])).toEqual([
      '0/mLatencyMs | M latency 5.0 ms', '0/hLatencyMs | H latency 31.0 ms', '0/mAmplitudeMv | M amplitude 12.0 mV', '0/hAmplitudeMv | H amplitude 3.0 mV', '0/legLengthMm | knee crease to inner ankle 400 mm',
      '0/hmRatio | H/M ratio 0.25 | 3 mV / 12 mV | common practice',
      '0/hExpectedMs | expected H latency 32.7 ms | 9.14 + 0.46 x 40 cm + 0.1 x age | Braddom and Johnson, Arch Phys Med Rehabil 1974;55:161-166, from memory',
    ])
  })
  it('H-reflex without H, without M', () => {
    expect(sheet('h-reflex-soleus', [['popliteal-fossa', { mAmplitudeMv: 12, hAmplitudeMv: 'no-response' }]])).toEqual(['0/mAmplitudeMv | M amplitude 12.0 mV', '0/hAmplitudeMv | H amplitude no response'])
    expect(sheet('h-reflex-soleus', [['popliteal-fossa', { hAmplitudeMv: 3, legLengthMm: 'not-done' }]])).toEqual(['0/hAmplitudeMv | H amplitude 3.0 mV', '0/legLengthMm | knee crease to inner ankle not done'])
  })
  it('H-reflex is judged by its latency', () => {
    expect(verdicts('h-reflex-soleus', [['popliteal-fossa', { mLatencyMs: 5, hLatencyMs: 34.2, mAmplitudeMv: 12, hAmplitudeMv: 3, legLengthMm: 400 }]], policyWith('preston-shapiro-adult'))).toEqual({ '0/mLatencyMs': 'none', '0/hLatencyMs': 'outside ≤ 34, above', '0/mAmplitudeMv': 'none', '0/hAmplitudeMv': 'none', '0/legLengthMm': 'none', '0/hmRatio': 'none', '0/hExpectedMs': 'none' })
    expect(verdicts('h-reflex-fcr', [['elbow', { hLatencyMs: 17 }]])).toEqual({ '0/hLatencyMs': 'no-limit: the adopted sets have none for it' })
  })
  it('blink', () => {
    expect(sheet('blink', [['supraorbital', { r1Ms: 11, r2IpsilateralMs: 33.4, r2ContralateralMs: 31 }]])).toEqual([
      '0/r1Ms | R1, same side 11.0 ms', '0/r2IpsilateralMs | R2, same side 33.4 ms', '0/r2ContralateralMs | R2, other side 31.0 ms', '0/r2DifferenceMs | R2, difference of the two eyes 2.4 ± 0.1 ms | 33.4 ms and 31 ms | arithmetic',
    ])
    expect(sheet('blink', [['supraorbital', { r2IpsilateralMs: 33.4, r2ContralateralMs: 'no-response' }]])).toEqual(['0/r2IpsilateralMs | R2, same side 33.4 ms', '0/r2ContralateralMs | R2, other side no response'])
    expect(sheet('blink', [['supraorbital', { r2ContralateralMs: 33.4 }]])).toEqual(['0/r2ContralateralMs | R2, other side 33.4 ms'])
  })
  it('blink is judged number by number', () => {
    expect(verdicts('blink', [['supraorbital', { r1Ms: 13.2, r2IpsilateralMs: 41, r2ContralateralMs: 33 }]], policyWith('preston-shapiro-adult'))).toEqual({ '0/r1Ms': 'outside ≤ 13, above', '0/r2IpsilateralMs': 'within ≤ 41, near', '0/r2ContralateralMs': 'within ≤ 44', '0/r2DifferenceMs': 'outside ≤ 7, above' })
    expect(verdicts('blink', [['supraorbital', { r1Ms: 13.2 }]], defaultPolicy)).toEqual({ '0/r1Ms': 'no-limit: no set adopted here' })
  })
})

/** Decrement 100 x (A1 - A4)/A1, increment 100 x (after - before)/before: F6.1 and F6.2 of the collection. */
describe('trains', () => {
  const DECREMENT = '100 x (first - response 4) / first | page of the Norwegian society on myasthenia (read)'
  const INCREMENT = 'Lipka et al., Muscle Nerve 2020, doi:10.1002/mus.26885'
  const trains = (...rows: Rows) => sheet('repetitive-ulnar-adm', rows)
  it.each<[name: string, rows: Rows, lines: string[]]>([
    ['at rest', [['rest', { rateHz: 3 }, [8, 7, 6.5, 6, 6.2]]], ['0/rateHz | rate, at rest 3.0 Hz', `0/decrementPercent | decrement, at rest 25 % | ${DECREMENT}`]],
    ['after exercise', [['rest', {}, [8, 8, 8, 8]], ['after-exercise', { secondsAfterExercise: 10 }, [12, 11, 10, 9]]], [`0/decrementPercent | decrement, at rest 0 % | ${DECREMENT}`, '1/secondsAfterExercise | after exercise, after exercise, 10 s 10 s', `1/decrementPercent | decrement, after exercise, 10 s 25 % | ${DECREMENT}`, `1/incrementPercent | increment, after exercise, 10 s 50 % | from 8 mV to 12 mV | ${INCREMENT}`]],
    ['single amplitudes', [['rest', { amplitudeMv: 2 }], ['after-exercise', { amplitudeMv: 5 }]], ['0/amplitudeMv | amplitude, at rest 2.0 mV', '1/amplitudeMv | amplitude, after exercise 5.0 mV', `1/incrementPercent | increment, after exercise 150 % | from 2 mV to 5 mV | ${INCREMENT}`]],
    ['nothing at rest to grow from', [['after-exercise', { amplitudeMv: 5 }]], ['0/amplitudeMv | amplitude, after exercise 5.0 mV']],
    ['no response at rest', [['rest', { amplitudeMv: 'no-response' }], ['after-exercise', { amplitudeMv: 5 }]], ['0/amplitudeMv | amplitude, at rest no response', '1/amplitudeMv | amplitude, after exercise 5.0 mV']],
    ['no response after exercise', [['rest', { amplitudeMv: 5 }], ['after-exercise', { amplitudeMv: 'no-response' }]], ['0/amplitudeMv | amplitude, at rest 5.0 mV', '1/amplitudeMv | amplitude, after exercise no response']],
    ['too few responses', [['rest', {}, [8, 7, 6]]], [`0/decrementPercent | decrement, at rest not computable | first or fourth response missing | ${DECREMENT}`]],
    ['a fast train grows from its first', [['high-rate', { rateHz: 30 }, [2, 5, 4]]], ['0/rateHz | rate, high rate 30.0 Hz', `0/incrementPercent | increment, high rate 150 % | from 2 mV to 5 mV | ${INCREMENT}`]],
    ['10 Hz is fast', [['rest', { rateHz: 10 }, [2, 3, 4, 4]]], ['0/rateHz | rate, at rest 10.0 Hz', `0/incrementPercent | increment, at rest 100 % | from 2 mV to 4 mV | ${INCREMENT}`]],
    ['9.9 Hz is not', [['rest', { rateHz: 9.9 }, [4, 4, 4, 3]]], ['0/rateHz | rate, at rest 9.9 Hz', `0/decrementPercent | decrement, at rest 25 % | ${DECREMENT}`]],
    ['a fast train of one', [['high-rate', {}, [2]]], []],
    ['a fast train that begins with nothing', [['high-rate', {}, ['no-response', 3, 4]]], []],
    ['a fast train without single responses', [['high-rate', { amplitudeMv: 2 }]], ['0/amplitudeMv | amplitude, high rate 2.0 mV']],
    ['growth from 0', [['high-rate', {}, [0, 3]]], ['0/incrementPercent | increment, high rate not computable | the response before is not above 0']],
    ['seconds say nothing at rest', [['rest', { secondsAfterExercise: 5 }, [8, 8, 8, 8]]], ['0/secondsAfterExercise | after exercise, at rest 5 s', `0/decrementPercent | decrement, at rest 0 % | ${DECREMENT}`]],
  ])('%s', (_, rows, lines) => expect(trains(...rows)).toEqual(lines))
  it('a decrement without a limit says so, the rest stands beside it', () => {
    expect(verdicts('repetitive-ulnar-adm', [['rest', { rateHz: 3, amplitudeMv: 8, areaMvMs: 20 }, [8, 8, 8, 7]], ['after-exercise', { secondsAfterExercise: 10 }, [9, 9, 9, 9]]])).toEqual({
      '0/rateHz': 'none', '0/amplitudeMv': 'none', '0/areaMvMs': 'none', '0/decrementPercent': 'no-limit: the adopted sets have none for it', '1/secondsAfterExercise': 'none', '1/decrementPercent': 'no-limit: the adopted sets have none for it', '1/incrementPercent': 'none',
    })
  })
})

/** Linear: 1.5 m/s (median motor), 1.7 (sural) and 0.2 ms per °C up to 34 °C: F2.2 of the collection. */
describe('temperature-corrected values stand beside the measured ones', () => {
  const corrected: Policy = { ...defaultPolicy, temperatureCorrection: true }
  const at = (celsius: number): Partial<Study> => ({ temperatures: (['hand', 'foot'] as const).map(segment => ({ id: segment, segment, side: 'right', celsius, warmed: false })) })
  const median: Rows = [['wrist', { latencyMs: 4.8 }], ['elbow', { latencyMs: 9.8, distanceMm: 220 }]]
  const of = (technique: string, rows: Rows, celsius: number, policy = corrected) => sheet(technique, rows, { policy, study: at(celsius) }).filter(line => line.includes('corrected'))
  const HALAR = 'linear: measured + slope x (34 °C - measured temperature) | Halar et al., Arch Phys Med Rehabil 1980 to 1983, from memory'
  const KIM = 'linear: measured - 0.2 ms x (34 °C - measured temperature) | Kim, Ann Clin Neurophysiol 2006;8:125-134'
  it('of a motor run', () => expect(of('median-motor-apb', median, 29)).toEqual([`0/correctedLatencyMs | latency, corrected from 29 to 34 °C 3.8 ms | ${KIM}`, `1/correctedVelocityMps | velocity, corrected from 29 to 34 °C 52 m/s | ${HALAR}`]))
  it('of a sensory run', () => expect(of('sural', [['calf', { onsetLatencyMs: 3.5, distanceMm: 140 }]], 28)).toEqual([`0/correctedVelocityMps | velocity, corrected from 28 to 34 °C 50 m/s | ${HALAR}`]))
  it.each<[name: string, technique: string, rows: Rows, celsius: number, policy: Policy]>([
    ['where the limb was warm', 'median-motor-apb', median, 33, corrected],
    ['where it is not turned on', 'median-motor-apb', median, 29, defaultPolicy],
    ['without a velocity', 'sural', [['calf', { onsetLatencyMs: 3.5 }]], 29, corrected],
  ])('not %s', (_, technique, rows, celsius, policy) => expect(of(technique, rows, celsius, policy)).toEqual([]))
  it('nor without a temperature', () => expect(sheet('median-motor-apb', median, { policy: corrected, study: { temperatures: [] } }).filter(line => line.includes('corrected'))).toEqual([]))
})

describe('what was typed and what was computed', () => {
  it.each<[technique: string, rows: Rows]>([
    ['ulnar-motor-adm', [...ulnar, ['median-elbow', { latencyMs: 6, amplitudeMv: 3 }]]],
    ['ulnar-motor-adm-short', [['elbow-minus-4', { latencyMs: 6 }], ['elbow-minus-2', { latencyMs: 6.5, distanceMm: 20 }]]],
    ['median-sensory-d2', [['palm', { onsetLatencyMs: 1.4, distanceMm: 70 }], ['wrist', { onsetLatencyMs: 3, peakLatencyMs: 3.6, amplitudeUv: 9, durationMs: 1.5, distanceMm: 140, stimulusMa: 20 }]]],
    ['ulnar-f-adm', [['wrist', { mLatencyMs: 3, limbLengthMm: 575 }, [27, 28]]]],
    ['h-reflex-soleus', [['popliteal-fossa', { mLatencyMs: 5, hLatencyMs: 31, mAmplitudeMv: 12, hAmplitudeMv: 3, legLengthMm: 400 }]]],
    ['blink', [['supraorbital', { r1Ms: 11, r2IpsilateralMs: 33, r2ContralateralMs: 31 }]]],
    ['repetitive-ulnar-adm', [['rest', { rateHz: 3, amplitudeMv: 8 }, [8, 7, 6, 6]], ['after-exercise', { secondsAfterExercise: 10 }, [9, 9, 9, 9]], ['high-rate', {}, [2, 3]]]],
  ])('%s', (technique, rows) => {
    const [assessed] = assess(studyWith([run(technique, 'right', rows, { id: 'r' })], { temperatures: [{ id: 't', segment: 'hand', side: 'right', celsius: 29, warmed: false }] }), { ...ndtfPolicy, temperatureCorrection: true }).runs
    const cells = rows.flatMap(([, values], index) => Object.keys(values).map(quantity => `r/r-${index}/${quantity}`))
    expect(assessed!.results.filter(result => result.typed).map(result => result.key).sort()).toEqual(cells.sort())
    expect(new Set(assessed!.results.map(result => `${result.runId} ${result.side}`))).toEqual(new Set(['r right']))
  })
  it('at their sites and segments', () => {
    const [assessed] = assess(studyWith([run('ulnar-motor-adm', 'right', ulnar, { id: 'r' })])).runs
    expect(Object.fromEntries(assessed!.results.filter(result => !result.typed).map(result => [result.key.replace(/^r\/r-/, ''), result.at]))).toEqual({
      '0/terminalLatencyIndex': 'wrist', '0/residualLatencyMs': 'wrist', '1/velocityMps': 'forearm', '1/amplitudeFallPercent': 'forearm', '1/areaFallPercent': 'forearm', '1/durationRisePercent': 'forearm',
      '2/velocityMps': 'across-elbow', '2/velocityDropMps': 'across-elbow', '2/velocityDropPercent': 'across-elbow', '2/amplitudeFallPercent': 'across-elbow', '2/areaFallPercent': 'across-elbow', '2/durationRisePercent': 'across-elbow',
      '2/amplitudeFallFromDistalPercent': 'wrist-above-elbow', '2/areaFallFromDistalPercent': 'wrist-above-elbow', '2/durationRiseFromDistalPercent': 'wrist-above-elbow',
    })
  })
})

/** Invented limits: these two are shown only where the set in use has one for them. */
describe('falls in mV and ratios', () => {
  const of = (amplitudes: [Values['amplitudeMv'], Values['amplitudeMv']], quantities: string[]) => {
    const table = tableOf(quantities.map((quantity, index) => limitRow({ id: `row-${index}`, technique: 'median-motor-apb', quantity, at: 'forearm', unit: '', value: 2, bound: quantity === 'amplitudeRatio' ? 'lower' : 'upper', distanceMm: null, direction: null, amplitudeDefinition: null })))
    const study = studyWith([run('median-motor-apb', 'right', [['wrist', { amplitudeMv: amplitudes[0] }], ['elbow', { amplitudeMv: amplitudes[1] }]], { id: 'r' })])
    const results = assessStudy(study, [table], { ...defaultPolicy, adopted: [adopt(table)] }).runs[0]!.results.filter(result => ['amplitudeFallMv', 'amplitudeRatio'].includes(result.quantity))
    expect(results.map(result => [result.typed, result.at])).toEqual(results.map(() => [false, 'forearm']))
    return results.map(result => `${resultLine(result)} | ${verdictLine(result.verdict)}`)
  }
  it.each<[name: string, amplitudes: Parameters<typeof of>[0], quantities: string[], lines: string[]]>([
    ['both', [8, 5], ['amplitudeFallMv', 'amplitudeRatio'], [`r/r-1/amplitudeFallMv | amplitude fall in mV, wrist to elbow 3.0 mV | 8 mV - 5 mV | ${CHANGE} | outside ≤ 2, above`, `r/r-1/amplitudeRatio | amplitude ratio, wrist to elbow 0.63 | 5 mV / 8 mV | ${CHANGE} | outside ≥ 2, below`]],
    ['the fall alone', [8, 6], ['amplitudeFallMv'], [`r/r-1/amplitudeFallMv | amplitude fall in mV, wrist to elbow 2.0 mV | 8 mV - 6 mV | ${CHANGE} | within ≤ 2`]],
    ['neither without a limit', [8, 5], ['durationMs'], []],
    ['no response above', [8, 'no-response'], ['amplitudeFallMv', 'amplitudeRatio'], []],
    ['not recordable below', ['technical', 5], ['amplitudeFallMv', 'amplitudeRatio'], []],
  ])('%s', (_, amplitudes, quantities, lines) => expect(of(amplitudes, quantities)).toEqual(lines))
})
