import { describe, expect, it } from 'vitest'
import { defaultPolicy } from '#shared/calculations/types'
import type { Run } from '#shared/schemas/study'
import { assess, remarkOf, studyWith } from '../study-maker'
import { asked, line, right, type Row } from './asking'

const codes = ['proximal-larger', 'martin-gruber', 'weak-stimulus', 'train-keeps-falling', 'train-rate']
const pair = (technique: string, sites: [string, string], distal: Row[1], proximal: Row[1], ...more: Row[]): Run => right(technique, [[sites[0], distal], [sites[1], proximal], ...more])
const median = (distal: Row[1]['amplitudeMv'], proximal: Row[1]['amplitudeMv'], ...more: Row[]) => pair('median-motor-apb', ['wrist', 'elbow'], { amplitudeMv: distal }, { amplitudeMv: proximal }, ...more)
const ulnar = (distal: number, proximal: number, ...more: Row[]) => pair('ulnar-motor-adm', ['wrist', 'below-elbow'], { amplitudeMv: distal }, { amplitudeMv: proximal }, ...more)
const edb = (...more: Row[]) => pair('fibular-motor-edb', ['ankle', 'below-fibular-head'], { amplitudeMv: 3 }, { amplitudeMv: 4.5 }, ...more)

/** More than 20 %: formula collection F1.6, from memory. */
describe('larger above than below', () => {
  const byMedian = 'was the stimulus at the wrist strong enough, did it spread at the elbow? Fibres may cross to the ulnar nerve in the forearm.'
  const byFibular = 'was the stimulus at the ankle strong enough? Part of the muscle may be supplied behind the lateral malleolus.'
  const byOthers = 'was the distal stimulus strong enough, did the proximal one spread to a neighbour?'
  it.each([
    ['by 20 %', median(10, 12), []],
    ['by more', median(10, 12.1), [`check proximal-larger/r/r-1/amplitudeMv: The amplitude at elbow is 21 % larger than at wrist: ${byMedian}`]],
    ['the fibular nerve', edb(), [`check proximal-larger/r/r-1/amplitudeMv: The amplitude at below fibular head is 50 % larger than at ankle: ${byFibular}`]],
    ['the ulnar nerve', ulnar(5, 10), [`check proximal-larger/r/r-1/amplitudeMv: The amplitude at below elbow is 100 % larger than at wrist: ${byOthers}`]],
    ['each segment by itself', median(10, 10, ['axilla', { amplitudeMv: 13 }]), ['check proximal-larger/r/r-2/amplitudeMv: The amplitude at axilla is 30 % larger than at elbow: ' + byMedian]],
    ['nothing to compare with', median(undefined, 12), []],
    ['an absent response', median('no-response', 12), []],
    ['above absent', median(10, 'technical'), []],
    ['from nothing', median(0, 12), []],
    ['not in sensory studies', right('median-sensory-d2', [['palm', { amplitudeMv: 5 }], ['wrist', { amplitudeMv: 10 }]]), []],
    ['stimulated beside it too', edb(['lateral-malleolus', { amplitudeMv: 1.24 }]), [`note proximal-larger/r/r-1/amplitudeMv: The amplitude at below fibular head is 50 % larger than at ankle: ${byFibular} Stimulated beside it, in the same muscle: behind the lateral malleolus 1.2 mV.`]],
    ['and nothing there', edb(['lateral-malleolus', { amplitudeMv: 'no-response' }]), [`note proximal-larger/r/r-1/amplitudeMv: The amplitude at below fibular head is 50 % larger than at ankle: ${byFibular} Stimulated beside it, in the same muscle: behind the lateral malleolus no response.`]],
    ['a row beside it that is still blank', edb(['lateral-malleolus', {}]), [`check proximal-larger/r/r-1/amplitudeMv: The amplitude at below fibular head is 50 % larger than at ankle: ${byFibular}`]],
    ['at two places', median(10, 15, ['ulnar-wrist', { amplitudeMv: 4 }], ['ulnar-elbow', { amplitudeMv: 3 }]), [`note proximal-larger/r/r-1/amplitudeMv: The amplitude at elbow is 50 % larger than at wrist: ${byMedian} Stimulated beside it, in the same muscle: ulnar nerve at the wrist 4.0 mV, ulnar nerve below the elbow 3.0 mV.`]],
  ])('%s', (_, run, lines) => expect(asked(codes, [run])).toEqual(lines))

  it.each([
    ['the accessory fibular nerve', edb(), { sentence: 'Stimulate behind the lateral malleolus, recording the same muscle.', addTechnique: 'fibular-motor-edb', addSite: 'lateral-malleolus', side: 'right' }],
    ['the ulnar nerve', median(10, 15), { sentence: 'Stimulate the ulnar nerve at the wrist and at the elbow, recording the same muscle.', addTechnique: 'median-motor-apb', addSite: 'ulnar-wrist', side: 'right' }],
    ['in words where the technique has no such site', pair('median-motor-lumbrical', ['wrist', 'elbow'], { amplitudeMv: 1 }, { amplitudeMv: 2 }), { sentence: 'Stimulate the ulnar nerve at the wrist and at the elbow, recording the same muscle.', side: 'right' }],
    ['nothing for another muscle of the fibular nerve', pair('fibular-motor-ta', ['below-fibular-head', 'above-fibular-head'], { amplitudeMv: 3 }, { amplitudeMv: 4.5 }), undefined],
    ['nothing for another nerve', ulnar(5, 10), undefined],
    ['nothing where it was done', edb(['lateral-malleolus', { amplitudeMv: 1.2 }]), undefined],
  ])('offers %s', (_, run, suggestion) => expect(remarkOf(assess(studyWith([run])), 'proximal-larger')?.suggestion).toEqual(suggestion))
})

describe('an ulnar fall in the forearm without slowing', () => {
  /** With latencies: 205 mm in this time. */
  const timed = (time: number, changes: Partial<Run> = {}) => right('ulnar-motor-adm', [['wrist', { latencyMs: 3, amplitudeMv: 10, distanceMm: 80 }], ['below-elbow', { latencyMs: 3 + time, amplitudeMv: 7, distanceMm: 205 }]], changes)
  const falls = (much: number) => [`check martin-gruber/r/r-1/amplitudeMv: The amplitude falls by ${much} % from wrist to below elbow without slowing: fibres may cross from the median nerve in the forearm.`]
  it.each([
    ['by 20 %', ulnar(10, 8), []],
    ['by more', ulnar(10, 7.9), falls(21)],
    ['of the median nerve', median(10, 7), []],
    ['across the elbow', pair('ulnar-motor-adm', ['below-elbow', 'above-elbow'], { amplitudeMv: 10 }, { amplitudeMv: 7 }), []],
    ['with a velocity within its limit of 52 m/s', timed(3.94), falls(30)],
    ['with one below it', timed(3.95), []],
    ['stimulated beside it too', ulnar(10, 7, ['median-elbow', { amplitudeMv: 3.1 }]), ['note martin-gruber/r/r-1/amplitudeMv: The amplitude falls by 30 % from wrist to below elbow without slowing: fibres may cross from the median nerve in the forearm. Stimulated beside it, in the same muscle: median nerve at the elbow 3.1 mV.']],
  ])('%s', (_, run, lines) => expect(asked(codes, [run])).toEqual(lines))

  const withoutLimits = (run: Run) => assess(studyWith([run]), defaultPolicy).remarks.filter(remark => codes.includes(remark.code)).map(line)
  it('without limits, 40 m/s is not slow', () => expect(withoutLimits(timed(5.125))).toEqual(falls(30)))
  it('and less is', () => expect(withoutLimits(timed(5.13))).toEqual([]))
  it('where the limb is too cold to say, it is not asked', () => {
    const cold = { temperatures: [{ id: 'h', segment: 'hand' as const, side: 'right' as const, celsius: 28, warmed: false }] }
    expect(asked(codes, [timed(4.5)], cold)).toEqual([])
    expect(asked(codes, [timed(3.5)], cold)).toEqual(falls(30))
  })
  it('offers the median nerve at the elbow', () => {
    expect(remarkOf(assess(studyWith([ulnar(10, 7)])), 'martin-gruber')?.suggestion).toEqual({ sentence: 'Stimulate the median nerve at the elbow, recording the same muscle.', addTechnique: 'ulnar-motor-adm', addSite: 'median-elbow', side: 'right' })
    expect(remarkOf(assess(studyWith([ulnar(10, 7, ['median-elbow', { amplitudeMv: 3 }])])), 'martin-gruber')?.suggestion).toBeUndefined()
  })
})

describe('a fall with a stimulus no stronger', () => {
  const at = (amplitudes: [number, number], stimuli: [Row[1]['stimulusMa'], Row[1]['stimulusMa']]) => pair('median-motor-apb', ['wrist', 'elbow'], { amplitudeMv: amplitudes[0], stimulusMa: stimuli[0] }, { amplitudeMv: amplitudes[1], stimulusMa: stimuli[1] })
  const weak = (mA: number) => [`check weak-stimulus/r/r-1/stimulusMa: The response at elbow is smaller than at wrist and the stimulus no stronger (${mA} mA): was it supramaximal?`]
  it.each([
    ['weaker', at([10, 7], [40, 30]), weak(30)],
    ['the same', at([10, 7], [40, 40]), weak(40)],
    ['stronger', at([10, 7], [40, 40.1]), []],
    ['a fall of 20 %', at([10, 8], [40, 30]), []],
    ['larger', at([10, 11], [40, 30]), []],
    ['not noted below', at([10, 7], [undefined, 30]), []],
    ['not noted above', at([10, 7], [40, undefined]), []],
  ])('%s', (_, run, lines) => expect(asked(codes, [run])).toEqual(lines))
})

/** 2 to 5 Hz: table of soft ranges; trains that keep falling: pages of a society, read. */
describe('trains', () => {
  const train = (series: number[], rateHz?: number, technique = 'repetitive-ulnar-adm') => right(technique, [['rest', rateHz === undefined ? {} : { rateHz }, series]])
  const falling = [8.0, 7.7, 7.4, 7.1, 6.8, 6.5]
  const keeps = ['check train-keeps-falling/r/r-0: The train at rest falls to its last response without levelling off: check the electrodes and movement, and repeat it.']
  const rate = (hz: number) => [`note train-rate/r/r-0/rateHz: A decrement is usually read at 2 to 5 Hz; ${hz} Hz was entered.`]
  it.each([
    ['keeps falling', train(falling, 3), keeps],
    ['levels off', train([8, 7.7, 7.4, 7.2, 7.2, 7.3], 3), []],
    ['falls fast', train(falling, 30), []],
    ['2 Hz', train([8], 2), []],
    ['slower', train([8], 1.9), rate(1.9)],
    ['5 Hz', train([8], 5), []],
    ['faster', train([8], 5.1), rate(5.1)],
    ['rate not noted', train([8]), []],
    ['no train', right('median-f-apb', [['wrist', { rateHz: 1 }, falling]]), []],
  ])('%s', (_, run, lines) => expect(asked(codes, [run])).toEqual(lines))
})

describe('gaps in a row that was begun', () => {
  const empty = (what: string, quantity: string, row = 0, site = 'wrist') => `note empty/r/r-${row}/${quantity}: The ${what} at ${site} is empty.`
  const distance = (row = 0, site = 'wrist') => `note empty/r/r-${row}/distanceMm: The distance at ${site} is empty: no velocity can be computed and no limit at a fixed distance applied.`
  const motor = (...rows: Row[]) => right('median-motor-apb', rows)
  const full = { latencyMs: 3.5, amplitudeMv: 8, distanceMm: 80 }
  it.each([
    ['none', motor(['wrist', full]), []],
    ['motor latency', motor(['wrist', { amplitudeMv: 8, distanceMm: 80 }]), [empty('latency', 'latencyMs')]],
    ['motor amplitude', motor(['wrist', { latencyMs: 3.5, distanceMm: 80 }]), [empty('amplitude', 'amplitudeMv')]],
    ['distance', motor(['wrist', { latencyMs: 3.5, amplitudeMv: 8 }]), [distance()]],
    ['an absence is no gap', motor(['wrist', { latencyMs: 3.5, amplitudeMv: 'technical', distanceMm: 'not-done' }]), []],
    ['a distance alone begins nothing', motor(['wrist', { distanceMm: 80 }]), []],
    ['nor does an absence', motor(['wrist', { latencyMs: 'no-response' }]), []],
    ['sensory onset', right('sural', [['calf', { amplitudeUv: 10, distanceMm: 140 }]]), [empty('onset latency', 'onsetLatencyMs', 0, 'calf')]],
    ['mixed amplitude', right('median-mixed-palm', [['palm', { onsetLatencyMs: 1.5, distanceMm: 80 }]]), [empty('amplitude', 'amplitudeUv', 0, 'palm')]],
    ['other studies have none', right('median-f-apb', [['wrist', { minimumLatencyMs: 28 }]]), []],
    ['a duration beside others', motor(['wrist', { ...full, durationMs: 5 }], ['elbow', { ...full, latencyMs: 8 }]), ['note empty/r/r-1/durationMs: The duration at elbow is empty: dispersion cannot be judged there.']],
    ['no durations at all', motor(['wrist', full], ['elbow', { ...full, latencyMs: 8 }]), []],
    ['durations everywhere', motor(['wrist', { ...full, durationMs: 5 }], ['elbow', { ...full, latencyMs: 8, durationMs: 5 }]), []],
    ['a duration beside a row not begun', motor(['wrist', { ...full, durationMs: 5 }], ['elbow', { distanceMm: 200 }]), []],
    ['sensory durations are not needed', right('median-sensory-d2', [['palm', { onsetLatencyMs: 1.5, amplitudeUv: 20, distanceMm: 70, durationMs: 1 }], ['wrist', { onsetLatencyMs: 2.8, amplitudeUv: 20, distanceMm: 140 }]]), []],
  ])('%s', (_, run, lines) => expect(asked(['empty'], [run])).toEqual(lines))
})
