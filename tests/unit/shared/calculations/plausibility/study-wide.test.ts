import { describe, expect, it } from 'vitest'
import type { Run, RunRow, Study } from '#shared/schemas/study'
import { assess, policyWith, studyWith } from '../study-maker'
import { asked, left, right, type Row } from './asking'

type Values = RunRow['values']
const codes = ['side-unlike-referral', 'recorded-twice', 'sides-identical', 'sural-alone', 'sensory-beside-long-latency', 'side-amplitude', 'unknown-technique']
const median = (side: typeof right, values: Values = { latencyMs: 3.5, amplitudeMv: 8 }, changes: Partial<Run> = {}) => side('median-motor-apb', [['wrist', values]], changes)
const named = (id: string, run: Run, changes: Partial<Run> = {}): Run => ({ ...run, id, ...changes })

describe('the side of the referral', () => {
  const unlike = (of: string, only: string) => [`check side-unlike-referral: The referral asks for the ${of} side; only the ${only} was recorded.`]
  it.each([
    ['right asked, left recorded', [median(left)], 'right', unlike('RIGHT', 'LEFT')],
    ['left asked, right recorded', [median(right)], 'left', unlike('LEFT', 'RIGHT')],
    ['both recorded', [median(right), median(left, { latencyMs: 3.4 })], 'left', []],
    ['the side asked for', [median(right)], 'right', []],
    ['both asked for', [median(right)], 'both', []],
    ['nothing asked for', [median(right)], null, []],
    ['nothing recorded', [], 'right', []],
    ['a run without a number does not count', [median(left, { distanceMm: 80 })], 'right', []],
  ] as [string, Run[], Study['referralSide'], string[]][])('%s', (_, runs, referralSide, lines) => expect(asked(codes, runs, { referralSide })).toEqual(lines))
})

describe('recorded twice', () => {
  const twice = (id: string, name = 'RIGHT median motor') => [`check recorded-twice/${id}: ${name} was recorded twice: say which one repeats the other, or remove one.`]
  const [a, b, c] = ['a', 'b', 'c'].map((id, index) => named(id, median(right, { latencyMs: 3.5 + index / 10 }))) as [Run, Run, Run]
  it.each([
    ['the second by its id', [a, b], twice('b')],
    ['whatever the order', [b, a], twice('b')],
    ['three times', [a, b, c], [...twice('b'), ...twice('c')]],
    ['the second repeats the first', [a, { ...b, repeats: 'a' }], []],
    ['the first repeats the second', [{ ...a, repeats: 'b' }, b], []],
    ['on two sides', [a, { ...b, side: 'left' }], []],
    ['two techniques', [a, { ...b, technique: 'ulnar-motor-adm' }], []],
    ['the second was not measured', [a, { ...b, rows: [] }], []],
    ['a needle', [named('a', right('needle-apb', [['muscle', {}]])), named('b', right('needle-apb', [['muscle', {}]]))].map(one => ({ ...one, rows: one.rows.map(row => ({ ...row, ordinals: { fibrillations: '2+' } })) })), []],
  ] as [string, Run[], string[]][])('%s', (_, runs, lines) => expect(asked(codes, runs)).toEqual(lines))

  it('a technique that is not known is named by its id, and cannot be judged', () => {
    const unknown = (run: string) => `stop unknown-technique/${run}: The technique unheard-of is not in the catalogue: nothing of this run can be judged.`
    expect(asked(codes, [a, b].map(one => ({ ...one, technique: 'unheard-of' })))).toEqual([...twice('b', 'RIGHT unheard-of'), unknown('a'), unknown('b')])
  })
})

describe('the same on both sides', () => {
  const copied = ['check sides-identical/r: Every number of RIGHT median motor is the same on the LEFT: was one side recorded twice, or copied?']
  const both = (r: Row[], l: Row[] = r): Run[] => [right('median-motor-apb', r), left('median-motor-apb', l)]
  const three: Values = { latencyMs: 3.5, amplitudeMv: 8, durationMs: 5 }
  it.each([
    ['three numbers', both([['wrist', three]]), copied],
    ['in two rows', both([['wrist', { latencyMs: 3.5, amplitudeMv: 8 }], ['elbow', { latencyMs: 7.5 }]]), copied],
    ['two numbers', both([['wrist', { latencyMs: 3.5, amplitudeMv: 8 }]]), []],
    ['the distance is often the same', both([['wrist', { latencyMs: 3.5, amplitudeMv: 8, distanceMm: 80 }]]), []],
    ['and need not be', both([['wrist', { ...three, distanceMm: 80 }]], [['wrist', { ...three, distanceMm: 70 }]]), copied],
    ['absences are no numbers', both([['wrist', { latencyMs: 'no-response', amplitudeMv: 'no-response', durationMs: 'no-response' }]]), []],
    ['one number differs', both([['wrist', three]], [['wrist', { ...three, durationMs: 5.1 }]]), []],
    ['one more on the left', both([['wrist', three]], [['wrist', { ...three, areaMvMs: 20 }]]), []],
    ['another number in its place', both([['wrist', three]], [['wrist', { latencyMs: 3.5, amplitudeMv: 8, areaMvMs: 5 }]]), []],
    ['another site', both([['wrist', three]], [['elbow', three]]), []],
    ['one row more on the left', both([['wrist', three]], [['wrist', three], ['elbow', { latencyMs: 7.5 }]]), []],
    ['one row more on the right', both([['wrist', three], ['elbow', { latencyMs: 7.5 }]], [['wrist', three]]), []],
    ['one side alone', [right('median-motor-apb', [['wrist', three]])], []],
    ['two techniques', [right('median-motor-apb', [['wrist', three]]), left('ulnar-motor-adm', [['wrist', three]])], []],
  ])('%s', (_, runs, lines) => expect(asked(codes, runs)).toEqual(lines))
})

describe('the sural response alone', () => {
  const alone = ['check sural-alone/r: The sural response is there and every other response absent: check electrodes, leads and stimulator before believing it.']
  const sural = (amplitudeUv: Values['amplitudeUv'] = 10) => right('sural', [['calf', { amplitudeUv }]])
  const silent = (technique: string, site: string, values: Values = { latencyMs: 'no-response', amplitudeMv: 'no-response' }): Run => named(technique, right(technique, [[site, values]]))
  const [fibular, tibial, mixed] = [silent('fibular-motor-edb', 'ankle'), silent('tibial-motor-ah', 'ankle'), silent('median-mixed-palm', 'palm', { amplitudeUv: 'no-response', distanceMm: 80 })]
  const superficial = silent('superficial-fibular', 'lower-leg', { amplitudeUv: 'no-response' })
  it.each([
    ['among three', [sural(), fibular, tibial, superficial], alone],
    ['with a distance, which is no response', [sural(), fibular, tibial, mixed], alone],
    ['among two', [sural(), fibular, tibial], []],
    ['late responses do not count', [sural(), fibular, tibial, silent('tibial-f-ah', 'ankle', { minimumLatencyMs: 'no-response' })], []],
    ['nor do they disturb', [sural(), fibular, tibial, superficial, named('f', right('tibial-f-ah', [['ankle', { minimumLatencyMs: 50 }]]))], alone],
    ['another one there', [sural(), fibular, tibial, superficial, named('m', median(right))], []],
    ['another one not recordable', [sural(), fibular, tibial, silent('superficial-fibular', 'lower-leg', { amplitudeUv: 'technical' })], []],
    ['the sural absent as well', [sural('no-response'), fibular, tibial, superficial], []],
    ['the other sural absent', [sural(), { ...sural('no-response'), id: 'l', side: 'left' }, fibular, tibial, superficial], alone],
    ['no sural at all', [fibular, tibial, superficial, mixed], []],
  ] as [string, Run[], string[]][])('%s', (_, runs, lines) => expect(asked(codes, runs)).toEqual(lines))
})

/** Beyond 7.7 ms: Clin Neurol Neurosurg 2016;148:45-48, read. */
describe('a sensory response beside a very long motor latency', () => {
  const pair = (side: typeof right, latencyMs: Values['latencyMs'], sensory: Values = { amplitudeUv: 5 }) => [median(side, { latencyMs }), named('s', side('median-sensory-d2', [['wrist', sensory]]))]
  const odd = (run: string, side: string) => [`note sensory-beside-long-latency/${run}: A ${side} median sensory response beside a distal motor latency of 7.8 ms is unusual: check stimulation and recording.`]
  it.each([
    ['7.7 ms', pair(right, 7.7), []],
    ['longer', pair(right, 7.8), odd('r', 'RIGHT')],
    ['on the left', pair(left, 7.8), odd('l', 'LEFT')],
    ['no sensory response', pair(right, 7.8, { amplitudeUv: 'no-response', distanceMm: 140 }), []],
    ['no motor response', pair(right, 'no-response'), []],
    ['sensory not recorded', [median(right, { latencyMs: 7.8 })], []],
    ['sensory of the other side', [median(right, { latencyMs: 7.8 }), left('median-sensory-d2', [['wrist', { amplitudeUv: 5 }]])], []],
  ])('%s', (_, runs, lines) => expect(asked(codes, runs)).toEqual(lines))
})

/** 50 % is a question, no flag: number 6 of the decisions on numbers. */
describe('half the amplitude of the other side', () => {
  const sides = (r: number, l: number) => [median(right, { amplitudeMv: r }), median(left, { amplitudeMv: l })]
  const half = (much: number) => [`note side-amplitude/side-difference/median-motor-apb/sideDifferencePercent: Median motor, abductor pollicis brevis, RIGHT against LEFT: the amplitude differs by ${much} % between the sides. A question to the reader, not a flag.`]
  it.each([
    ['50 %', sides(8, 4), []],
    ['more', sides(8, 3.9), half(51)],
    ['on the left', sides(3.9, 8), half(51)],
    ['latencies are another matter', [median(right, { latencyMs: 8 }), median(left, { latencyMs: 3 })], []],
    ['an absent side has no per cent', [median(right, { amplitudeMv: 'no-response' }), median(left, { amplitudeMv: 8 })], []],
  ])('%s', (_, runs, lines) => expect(asked(codes, runs)).toEqual(lines))

  it.each([
    ['without a limit of 61 %', [], 8, 3, 1],
    ['within it', ['buschbacher-primary-studies'], 8, 3.5, 1],
    ['beyond it the flag says it', ['buschbacher-primary-studies'], 8, 3, 0],
  ])('%s', (_, sets, r, l, count) => {
    const runs = [right('fibular-motor-edb', [['ankle', { amplitudeMv: r }]]), left('fibular-motor-edb', [['ankle', { amplitudeMv: l }]])]
    const remarks = assess(studyWith(runs), policyWith(...sets)).remarks.filter(remark => remark.code.startsWith('side-amplitude'))
    expect(remarks).toHaveLength(count)
  })
  it('a velocity in per cent is no amplitude', () => {
    const leg = (side: typeof right, end: number) => side('fibular-motor-ta', [['below-fibular-head', { latencyMs: 3 }], ['above-fibular-head', { latencyMs: end, distanceMm: 100 }]])
    const runs = [leg(right, 5), leg(left, 8)]
    expect(assess(studyWith(runs), policyWith('buschbacher-primary-studies')).comparisons.flatMap(one => one.results.map(result => result.quantity))).toContain('sideDifferencePercent')
    expect(assess(studyWith(runs), policyWith('buschbacher-primary-studies')).remarks.filter(remark => remark.code.startsWith('side-amplitude'))).toEqual([])
  })
})
