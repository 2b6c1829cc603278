import { describe, expect, it } from 'vitest'
import type { Run, RunRow } from '#shared/schemas/study'
import { run } from '../study-maker'
import { cardLimits, motorNerve, patternOf, said, sensory, type Given, type Limit } from './pattern-maker'

type Values = RunRow['values']
const right = (technique: string, rows: [site: string, values: Values][], changes: Partial<Run> = {}): Run => run(technique, 'right', rows, changes)
const sites = ['wrist', 'elbow', 'axilla', 'erb'] as const
/** Amplitudes (mV) and durations (ms) of the median nerve from the wrist up to Erb's point, beside a normal ulnar nerve. */
const median = (amplitudes: (Values['amplitudeMv'])[], durations: Values['durationMs'][] = []): Run[] => [
  right('median-motor-apb', amplitudes.map((amplitudeMv, place): [string, Values] => [sites[place]!, { amplitudeMv, ...(durations[place] !== undefined && { durationMs: durations[place] }) }])),
  ...motorNerve('ulnar', 'right', { dml: 3, mcv: 55, amp: 8, proximalAmp: 7.8 }),
]
const of = (id: string, runs: Run[], criterion: string, given: Given = {}) => said(patternOf(id, runs, { limits: cardLimits, ...given }), criterion)
const ulnarFall = 'RIGHT ulnar amplitude fall 3 %, wrist to below elbow'

describe('several sites of one nerve', () => {
  it.each<[name: string, runs: Run[], criterion: string, line: string]>([
    ['the greatest fall is told', median([8, 7, 5]), 'e', `not-met: RIGHT median amplitude fall 38 %, wrist to axilla; ${ulnarFall}`],
    ['wherever it stands', median([8, 7, 7.5]), 'e', `not-met: RIGHT median amplitude fall 13 %, wrist to elbow; ${ulnarFall}`],
    ['a response that grows falls least', median([5, 8, 7]), 'e', `not-met: RIGHT median amplitude fall 13 %, elbow to axilla; ${ulnarFall}`],
    ['up to Erb\'s point half is asked for', median([8, undefined, undefined, 4.1]), 'probable', `not-met: RIGHT median amplitude fall 49 %, wrist to Erb's point; ${ulnarFall}`],
    ['elsewhere 30 %', median([8, undefined, 5.6]), 'probable', `not-met: RIGHT median amplitude fall 30 %, wrist to axilla; ${ulnarFall}`],
    ['a site that is not recordable has no part', median([8, 'technical', 7]), 'e', `not-met: RIGHT median amplitude fall 13 %, wrist to axilla; ${ulnarFall}`],
    ['the greatest rise is told', median([8, 7.9, 7.8], [5, 5.5, 6]), 'f', 'not-assessable: RIGHT median duration rise 20 %, wrist to axilla [1 nerve only could be looked at, 2 needed]'],
    ['durations that nobody typed keep nothing open', median([8, 7.9, 7.8], [5, 5.5]), 'f', 'not-assessable: RIGHT median duration rise 10 %, wrist to elbow [1 nerve only could be looked at, 2 needed]'],
    ['one that is not recordable does', median([8, 7.9, 7.8], [5, 5.5, 'technical']), 'f', 'not-assessable:  [1 nerve only could be looked at, 2 needed; RIGHT median duration not recordable for technical reasons]'],
  ])('%s', (_, runs, criterion, line) => expect(of('cidp-efns-pns-2010', runs, criterion)).toBe(line))
})

describe('one nerve with a fall beside another nerve that is slow, 2021', () => {
  const slow = motorNerve('fibular', 'right', { dml: 11, mcv: 28, amp: 4, proximalAmp: 3.9 })
  it.each<[name: string, amplitudes: Values['amplitudeMv'][], line: string]>([
    ['30 % up to the axilla', [8, undefined, 5.6], 'met: RIGHT median amplitude fall 30 %, wrist to axilla'],
    ['29 %', [8, undefined, 5.7], 'not-met: RIGHT median amplitude fall 29 %, wrist to axilla'],
    ['50 % up to Erb\'s point', [8, undefined, undefined, 4], 'met: RIGHT median amplitude fall 50 %, wrist to Erb\'s point'],
    ['49 %', [8, undefined, undefined, 4.1], 'not-met: RIGHT median amplitude fall 49 %, wrist to Erb\'s point'],
  ])('%s', (_, amplitudes, line) => {
    expect(of('cidp-ean-pns-2021', [...median(amplitudes), ...slow], 'e')).toBe(`${line}; ${ulnarFall}; RIGHT fibular amplitude fall 3 %, ankle to below fibular head`)
  })
})

describe('sensory responses beside CIDP', () => {
  const limits: Limit[] = [...cardLimits, ['sural', 'amplitudeUv', 'calf', 'lower', 4], ['median-sensory-d2', 'amplitudeUv', 'wrist', 'lower', 10], ['radial-sensory-snuffbox', 'amplitudeUv', null, 'lower', 7]]
  const motors = [...motorNerve('ulnar', 'right', { dml: 3, mcv: 55, amp: 8, proximalAmp: 7.8 }), ...motorNerve('tibial', 'right', { dml: 5, mcv: 44, amp: 8, proximalAmp: 7.2 })]
  const sural = (amplitude: number) => sensory('sural', 'right', { amplitude })
  const d2 = (amplitude: number | 'technical') => sensory('median-sensory-d2', 'right', { amplitude })
  const radial = (amplitude: number) => sensory('radial-sensory-snuffbox', 'right', { amplitude }, 100)
  const on: Given = { policy: { leaveOutEntrapmentSites: true } }
  it.each<[name: string, runs: Run[], given: Given, line: string]>([
    ['radial low, sural spared', [sural(9), radial(5)], {}, 'met: RIGHT superficial radial 5.0 µV, limit 7 µV; RIGHT sural amplitude 9.0 µV, limit 4 µV'],
    ['radial normal', [sural(9), radial(8)], {}, 'not-met: RIGHT superficial radial 8.0 µV, limit 7 µV; RIGHT sural amplitude 9.0 µV, limit 4 µV'],
    ['sural low as well', [sural(3), radial(5)], {}, 'not-met: RIGHT superficial radial 5.0 µV, limit 7 µV; RIGHT sural amplitude 3.0 µV, limit 4 µV'],
    ['the median alone stays open', [sural(9), d2(5)], {}, 'not-assessable: RIGHT median 5.0 µV, limit 10 µV; RIGHT sural amplitude 9.0 µV, limit 4 µV [median: not counted if from carpal tunnel syndrome]'],
    ['or is left out', [sural(9), d2(5)], on, 'not-met: RIGHT median 5.0 µV, limit 10 µV, left out at the wrist; RIGHT sural amplitude 9.0 µV, limit 4 µV'],
    ['the median not recordable', [sural(9), d2('technical')], {}, 'not-assessable: RIGHT sural amplitude 9.0 µV, limit 4 µV [not recordable for technical reasons]'],
    ['one sural of two low', [sural(9), { ...sural(3), id: 'l', side: 'left' }, radial(5)], {}, 'not-met: RIGHT superficial radial 5.0 µV, limit 7 µV; RIGHT sural amplitude 9.0 µV, limit 4 µV; LEFT sural amplitude 3.0 µV, limit 4 µV'],
  ])('%s', (_, runs, given, line) => expect(of('cidp-efns-pns-2010', [...motors, ...runs], 'sural-sparing', { limits, ...given })).toBe(line))

  it.each<[name: string, runs: Run[], line: string]>([
    ['two low', [sural(1.9), radial(3)], 'met: RIGHT superficial radial, RIGHT sural'],
    ['exactly half', [sural(2), radial(3.5)], 'not-met: none'],
    ['one low is enough', [sural(9), radial(3)], 'met: RIGHT superficial radial'],
    ['one not recordable', [sural(9), d2('technical')], 'not-assessable:  [not recordable for technical reasons]'],
  ])('Ho: %s', (_, runs, line) => expect(of('gbs-ho-1995', [...motors, ...runs], 'axonal-sensory', { limits })).toBe(line))
})

describe('percentiles of a set', () => {
  const england = (lower: [number, number]) => of('length-dependent-2005', [sensory('sural', 'right', { amplitude: 3 }), ...motorNerve('fibular', 'right', { dml: 5, amp: 1, mcv: 45 })], 'percentile', { limits: [['sural', 'amplitudeUv', 'calf', 'lower', 4, { percentile: lower[0] }], ['fibular-motor-edb', 'amplitudeMv', 'ankle', 'lower', 2, { percentile: lower[1] }]] })
  it.each<[[number, number], string]>([[[1, 1], 'met: lower limits at percentile 1'], [[1, 3], 'not-met: lower limits at percentile 1, 3'], [[0.5, 1], 'met: lower limits at percentile 0.5, 1']])('%s: %s', (lower, line) => expect(england(lower)).toBe(line))
})

describe('other nerves beside an elbow', () => {
  const limits: Limit[] = [['ulnar-motor-adm', 'velocityMps', 'across-elbow', 'lower', 50], ['ulnar-motor-adm', 'latencyMs', 'wrist', 'upper', 3.7], ['median-motor-apb', 'latencyMs', 'wrist', 'upper', 4.4], ['sural', 'amplitudeUv', 'calf', 'lower', 4], ['ulnar-sensory-dorsal', 'amplitudeUv', 'forearm', 'lower', 5]]
  const elbow = right('ulnar-motor-adm', [['wrist', { latencyMs: 3 }], ['below-elbow', { latencyMs: 7, distanceMm: 220 }], ['above-elbow', { latencyMs: 9, distanceMm: 100 }]])
  const others = (runs: Run[], study: Given['study'] = {}) => said(patternOf('ulnar-elbow', [elbow, ...runs], { limits, study }, 'right'), 'others')
  const apb = (latencyMs: number, changes: Partial<Run> = {}) => right('median-motor-apb', [['wrist', { latencyMs, distanceMm: 80 }]], changes)
  it.each<[name: string, runs: Run[], line: string]>([
    ['within', [apb(4)], 'met: runs within their limits: 1'],
    ['outside', [apb(5)], 'not-met: outside: RIGHT median motor'],
    ['two of them', [apb(5), sensory('sural', 'left', { amplitude: 3 })], 'not-met: outside: RIGHT median motor; LEFT sural sensory'],
    ['recorded twice, told once', [apb(4, { id: 'a' }), apb(4.1, { id: 'b' })], 'met: runs within their limits: 1'],
    ['its own nerves do not count', [right('ulnar-sensory-dorsal', [['forearm', { amplitudeUv: 2 }]])], 'not-assessable:  [no other nerve judged by a limit]'],
    ['those of the other side do', [{ ...elbow, id: 'l', side: 'left' }], 'met: runs within their limits: 1'],
    ['a run without a limit does not', [right('tibial-motor-ah', [['ankle', { latencyMs: 5 }]])], 'not-assessable:  [no other nerve judged by a limit]'],
    ['nor one that was not recordable', [right('median-motor-apb', [['wrist', { latencyMs: 'technical' }]])], 'not-assessable:  [no other nerve judged by a limit]'],
  ])('%s', (_, runs, line) => expect(others(runs)).toBe(line))
  it('nor a cold one', () => {
    const study: Given['study'] = { temperatures: [{ id: 'h', segment: 'hand', side: 'right', celsius: 33, warmed: false }] }
    expect(others([sensory('sural', 'right', { amplitude: 3 })], study)).toBe('not-assessable:  [no other nerve judged by a limit]')
  })
})

describe('which runs a result rests on', () => {
  const index = [sensory('median-mixed-palm', 'right', { peak: 2.2 }, 80), sensory('ulnar-mixed-palm', 'right', { peak: 2 }, 80), sensory('median-sensory-d4', 'right', { peak: 4.2 }), sensory('ulnar-sensory-d4', 'right', { peak: 3.2 })]
  it.each<[id: string, side: 'right' | undefined, runs: Run[], runIds: string[]]>([
    ['combined-sensory-index', 'right', index, ['right-median-mixed-palm', 'right-ulnar-mixed-palm', 'right-median-sensory-d4', 'right-ulnar-sensory-d4']],
    ['change-between-sites-2010', 'right', [right('median-motor-apb', [['wrist', { areaMvMs: 24 }], ['elbow', { areaMvMs: 12 }]]), right('ulnar-motor-adm', [['wrist', { amplitudeMv: 9 }], ['median-elbow', { amplitudeMv: 3 }]])], ['right-median-motor-apb']],
    ['bland-2000', 'right', [...motorNerve('median', 'right', { dml: 4, amp: 8 }), sensory('median-sensory-d2', 'right', { onset: 3 }), index[0]!], ['right-median-motor-apb', 'right-median-sensory-d2', 'right-median-mixed-palm']],
    ['length-dependent-2005', undefined, [sensory('sural', 'right', { amplitude: 3 }), ...motorNerve('fibular', 'right', { dml: 5, amp: 1, mcv: 45 })], ['right-sural', 'right-fibular-motor-edb']],
    ['gbs-ho-1995', undefined, [...motorNerve('ulnar', 'right', { dml: 3, amp: 8, f: 28 }), ...motorNerve('tibial', 'right', { dml: 5, amp: 8 })], ['right-ulnar-motor-adm', 'right-ulnar-f-adm', 'right-tibial-motor-ah']],
    ['split-hand-index', 'right', ['median-motor-apb', 'ulnar-motor-fdi', 'ulnar-motor-adm'].map(technique => right(technique, [['wrist', { amplitudeMv: 8 }]])), ['right-median-motor-apb', 'right-ulnar-motor-fdi', 'right-ulnar-motor-adm']],
  ])('%s', (id, side, runs, runIds) => expect(patternOf(id, runs, { limits: cardLimits }, side).runIds).toEqual(runIds))
  it('two tests outside their grey zones point the way', () => expect(patternOf('combined-sensory-index', index.map(one => one.technique === 'median-mixed-palm' ? sensory('median-mixed-palm', 'right', { peak: 2.5 }, 80) : one), {}, 'right').outcome.label).toBe('index not computable; palm, ring outside the grey zone'))
})

describe('sensory conduction beside a definite block', () => {
  const limits: Limit[] = [...cardLimits, ['median-sensory-d2', 'amplitudeUv', 'wrist', 'lower', 10], ['ulnar-sensory-d5', 'amplitudeUv', 'wrist', 'lower', 8], ['sural', 'amplitudeUv', 'calf', 'lower', 4]]
  const block = right('median-motor-apb', [['wrist', { amplitudeMv: 8, areaMvMs: 24, durationMs: 5 }], ['elbow', { amplitudeMv: 3, areaMvMs: 9, durationMs: 5.5 }]])
  const d2 = (amplitude: number | 'technical') => sensory('median-sensory-d2', 'right', { amplitude })
  const d5 = sensory('ulnar-sensory-d5', 'right', { amplitude: 15 })
  const sural = (amplitude: number | 'technical') => sensory('sural', 'right', { amplitude })
  const mmn = (runs: Run[], criterion: string) => of('mmn-efns-pns-2010', [block, ...runs], criterion, { limits })
  it.each<[name: string, runs: Run[], criterion: string, line: string]>([
    ['within', [d2(15), d5], 'sensory', 'met: RIGHT median amplitude 15.0 µV, limit 10 µV'],
    ['abnormal', [d2(5), d5], 'sensory', 'not-met: RIGHT median amplitude 5.0 µV, limit 10 µV'],
    ['of another nerve', [d5], 'sensory', 'not-assessable:  [RIGHT median: no sensory study]'],
    ['of the other side', [{ ...d2(15), id: 'l', side: 'left' }], 'sensory', 'not-assessable:  [RIGHT median: no sensory study]'],
    ['two nerves are too few', [d2(15), d5], 'sensory-2003', 'not-assessable:  [2 sensory nerves studied]'],
    ['one is as well', [d2(15)], 'sensory-2003', 'not-assessable:  [1 sensory nerve studied]'],
    ['three normal', [d2(15), d5, sural(9)], 'sensory-2003', 'met: 3 nerves'],
    ['one of three abnormal', [d2(15), d5, sural(3)], 'sensory-2003', 'not-met: abnormal: RIGHT sural'],
    ['one not recordable', [d2(15), d5, sural('technical')], 'sensory-2003', 'not-assessable: 3 nerves [not recordable for technical reasons; onset latency missing; not recorded]'],
  ])('%s', (_, runs, criterion, line) => expect(mmn(runs, criterion)).toBe(line))
  it('rests on the motor and the sensory runs', () => expect(patternOf('mmn-efns-pns-2010', [block, d2(15), d5], { limits }).runIds).toEqual(['right-median-motor-apb', 'right-median-sensory-d2', 'right-ulnar-sensory-d5']))
})

describe('which trains count', () => {
  const trains = (rows: [site: string, values: Values, series: number[]][]) => patternOf('myasthenic-decrement', [run('repetitive-ulnar-adm', 'right', rows, { id: 't' })], {}, 'right')
  const falling = [8, 6.8, 6.4, 6.2, 6.3]
  const lines = (rows: Parameters<typeof trains>[0]) => trains(rows).criteria.map(({ id }) => `${id.split('/').slice(1).join('/')}: ${said(trains(rows), id)}`)
  it('fast ones do not', () => {
    expect(lines([['rest', { rateHz: 3 }, falling], ['high-rate', {}, falling], ['after-exercise', { rateHz: 10 }, falling]]).filter(line => line.includes('decrement:'))).toEqual(['t-0/decrement: met: 22.5 %'])
  })
  it('nor does exercise without a time, nor the train at rest beside itself', () => {
    expect(lines([['rest', { rateHz: 3, secondsAfterExercise: 0 }, falling], ['after-exercise', { rateHz: 3 }, [8, 8, 8, 8]]]).slice(-2)).toEqual(['repair: not-assessable:  [no train at that time]', 'exhaustion: not-assessable:  [no train at that time]'])
  })
  it('the same decrement is neither repair nor exhaustion', () => {
    expect(lines([['rest', { rateHz: 3 }, falling], ['after-exercise', { rateHz: 3, secondsAfterExercise: 10 }, falling], ['after-exercise', { rateHz: 3, secondsAfterExercise: 60 }, falling]]).slice(-2).map(line => line.split(': ')[1])).toEqual(['not-met', 'not-met'])
  })
  it('have their muscle and place in words', () => {
    expect(trains([['rest', { rateHz: 3 }, falling]]).criteria.map(one => one.text)).toEqual([
      'ADM: at rest: decrement from the first to the fourth response above 10 % (5 to 10 % equivocal), stimuli at 2 to 5 Hz', 'ADM: above 10 % in more than one train', 'ADM: Beside: the largest step is from the first to the second response, and the train levels off',
      'ADM: Beside: less decrement right after exercise than at rest', 'ADM: Beside: more decrement one to four minutes after exercise than at rest',
    ])
  })
  it('and their run', () => expect(trains([['rest', { rateHz: 3 }, falling]]).runIds).toEqual(['t']))
})
