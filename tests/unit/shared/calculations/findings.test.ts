import { describe, expect, it } from 'vitest'
import { assessStudy } from '#shared/calculations/assess-study'
import { englishFindings } from '#shared/calculations/finding-words'
import { draftFindings, valueText, type Told } from '#shared/calculations/findings'
import { defaultPolicy, type AppliedLimit, type ComparisonAssessment, type Result, type RunAssessment, type Verdict } from '#shared/calculations/types'
import type { Run, RunRow, Study } from '#shared/schemas/study'
import { adopt, limitRow, tableOf } from './limit-fixtures'
import { assess, run, studyWith } from './study-maker'

type Values = RunRow['values']
const limit = (bound: 'upper' | 'lower', value: number): AppliedLimit => ({ bound, value, unit: '', setId: 's', setVersion: 1, setTitle: 's', rowId: 'r', subgroup: '', definition: '', percentile: 97, basis: 'read', verified: false })
const result = (verdict: Verdict, changes: Partial<Result> = {}): Result => ({ key: 'k', quantity: 'latencyMs', label: 'latency at wrist', unit: 'ms', typed: true, value: { kind: 'value', value: 5.2 }, print: '5.2', printUncertainty: '', verdict, flagged: false, ...changes })
const none: Partial<Result> = { value: { kind: 'absent', absence: 'no-response' }, print: 'no response' }
const [upper, lower] = [limit('upper', 4.4), limit('lower', 2)]

describe('a value in words', () => {
  const within = (nearLimit: boolean, ...limits: AppliedLimit[]): Verdict => ({ kind: 'within', limits, nearLimit })
  const outside = (direction: 'above' | 'below', one: AppliedLimit, nearLimit = false): Verdict => ({ kind: 'outside', direction, limit: one, limits: [upper, lower], nearLimit })
  it.each<[string, Result]>([
    ['latency at wrist 5.2 ms (within the limit, ≤ 4.4)', result(within(false, upper))],
    ['latency at wrist 5.2 ms (within the limit, ≤ 4.4 and ≥ 2.0)', result(within(false, upper, lower))],
    ['latency at wrist 5.2 ms (within the limit, ≤ 4.4, nearer to it than its measurement uncertainty)', result(within(true, upper))],
    ['latency at wrist 5.2 ms (above the limit, ≤ 4.4)', result(outside('above', upper))],
    ['latency at wrist 5.2 ms (below the limit, ≥ 2.0)', result(outside('below', lower))],
    ['latency at wrist 5.2 ms (above the limit, ≤ 4.4, nearer to it than its measurement uncertainty)', result(outside('above', upper, true))],
    ['latency at wrist no response (limit ≤ 4.4 and ≥ 2.0)', result({ kind: 'absent', limits: [upper, lower] }, none)],
    ['latency at wrist 5.2 ms (cold, not interpretable as slowing)', result({ kind: 'cold', because: 'cold, not interpretable as slowing: RIGHT hand 28.0 °C', limits: [upper], wouldBe: 'above' })],
    ['latency at wrist 5.2 ms (no limit: no set adopted here)', result({ kind: 'no-limit', because: 'no set adopted here' })],
    ['latency at wrist no response', result({ kind: 'no-limit', because: 'no set adopted here' }, none)],
    ['latency at wrist 5.2 ms (not judged: age missing)', result({ kind: 'not-judged', because: 'age missing' })],
    ['latency at wrist technical', result({ kind: 'not-judged', because: 'not recordable for technical reasons' }, { value: { kind: 'absent', absence: 'technical' }, print: 'technical' })],
    ['latency at wrist 5.2 ms', result({ kind: 'none' })],
    ['latency at wrist 5.2 ms', result({ kind: 'superseded', by: 'later' })],
    ['velocity elbow to wrist 54 m/s (above the limit, ≤ 4.40)', result({ kind: 'outside', direction: 'above', limit: { ...upper, value: 4.4 }, limits: [], nearLimit: false }, { label: 'velocity, elbow to wrist', unit: 'm/s', print: '54', quantity: 'hmRatio' })],
    ['amplitude 6.4 µV (within the limit, ≥ 4)', result(within(false, limit('lower', 4)), { label: 'amplitude', quantity: 'amplitudeUv', unit: 'µV', print: '6.4' })],
    ['F ratio 1.20', result({ kind: 'none' }, { label: 'F ratio', unit: '', print: '1.20' })],
  ])('%s', (words, one) => expect(valueText(one, englishFindings)).toBe(words))

  it('in the words of another language', () => {
    const words = { ...englishFindings, say: (text: string) => `<${text}>`, withinTheLimit: 'dans la limite', and: 'et', nearer: 'trop près', noLimit: 'sans limite', notJudged: 'non jugé', limit: 'limite' }
    expect(valueText(result(within(true, upper, lower)), words)).toBe('<latency at wrist> 5.2 ms (dans la limite, ≤ 4.4 et ≥ 2.0, trop près)')
    expect(valueText(result({ kind: 'no-limit', because: 'no set adopted here' }), words)).toBe('<latency at wrist> 5.2 ms (sans limite: <no set adopted here>)')
    expect(valueText(result({ kind: 'not-judged', because: 'age missing' }), words)).toBe('<latency at wrist> 5.2 ms (non jugé: <age missing>)')
    expect(valueText(result({ kind: 'absent', limits: [upper] }, none), words)).toBe('<latency at wrist> <no response> (limite ≤ 4.4)')
  })
})

/** One run with these results; nothing was recorded beside them. */
const told = (values: Values = { latencyMs: 3.5 }, technique = 'median-motor-apb', changes: Partial<Run> = {}) => run(technique, 'right', [['wrist', values]], { id: 'r', ...changes })
const texts = (runs: Run[], changes: Partial<Study> = {}, tables = [table]) => assessStudy(studyWith(runs, changes), tables, { ...defaultPolicy, adopted: tables.map(one => adopt(one)) }).findings.map(one => one.text)
const row = (id: string, technique: string, quantity: string, at: string | null, bound: 'upper' | 'lower', value: number) => limitRow({ id, technique, quantity, at, bound, value, unit: '', distanceMm: null, direction: null, amplitudeDefinition: null })
const table = tableOf([
  row('1', 'median-motor-apb', 'latencyMs', 'wrist', 'upper', 4.4), row('2', 'median-motor-apb', 'amplitudeMv', 'wrist', 'lower', 4), row('3', 'median-motor-apb', 'velocityMps', 'forearm', 'lower', 50),
  row('4', 'sural', 'onsetLatencyMs', null, 'upper', 3.6), row('5', 'side-difference/sural', 'sideDifferenceMs', 'onsetLatencyMs', 'upper', 0.5), row('6', 'side-difference/sural', 'sideDifferenceMs', 'peakLatencyMs', 'upper', 0.5),
])

describe('the sentence of a run', () => {
  const name = 'RIGHT median motor, abductor pollicis brevis'
  it.each<[name: string, runs: Run[], text: string]>([
    ['all within, each kind of number once', [run('median-motor-apb', 'right', [['wrist', { latencyMs: 3.5, amplitudeMv: 8 }], ['elbow', { latencyMs: 7.5, amplitudeMv: 8, distanceMm: 220 }]])], `${name}: latency, amplitude and velocity within limits.`],
    ['one kind within', [told({ latencyMs: 3.5 })], `${name}: latency within limits.`],
    ['one near its limit: all are told', [told({ latencyMs: 4.35, amplitudeMv: 8 })], `${name}: latency at wrist 4.4 ms (within the limit, ≤ 4.4, nearer to it than its measurement uncertainty), amplitude at wrist 8.0 mV (within the limit, ≥ 4.0).`],
    ['one outside', [told({ latencyMs: 5, amplitudeMv: 8 })], `${name}: latency at wrist 5.0 ms (above the limit, ≤ 4.4), amplitude at wrist 8.0 mV (within the limit, ≥ 4.0).`],
    ['what has no limit of its own is not told', [told({ latencyMs: 3.5, durationMs: 5, distanceMm: 80 })], `${name}: latency within limits.`],
    ['recorded, but nothing of it is judged', [told({ durationMs: 5 })], `${name}: recorded, nothing to judge.`],
    ['a way alone is nothing', [told({ distanceMm: 80 })], `${name}: nothing recorded.`],
    ['not recordable is told', [told({ durationMs: 'technical' })], `${name}: duration at wrist technical.`],
    ['over its distance', [run('sural', 'right', [['calf', { onsetLatencyMs: 3, distanceMm: 140 }]])], 'RIGHT sural sensory (140 mm): onset latency 3.0 ms (within the limit, ≤ 3.6), velocity 47 m/s (no limit: the adopted sets have none for it).'],
    ['over a distance that was not measured', [run('sural', 'right', [['calf', { onsetLatencyMs: 3, distanceMm: 'not-done' }]])], 'RIGHT sural sensory: onset latency 3.0 ms (within the limit, ≤ 3.6), distance not done.'],
    ['mixed runs have their distance too', [run('median-mixed-palm', 'left', [['palm', { peakLatencyMs: 2, distanceMm: 80 }]])], 'LEFT median mixed, palm to wrist (80 mm): peak latency 2.0 ms (no limit: the adopted sets have none for it).'],
    ['motor runs have none', [told({ latencyMs: 3.5, distanceMm: 80 })], `${name}: latency within limits.`],
    ['beside the line, the amplitude alone is told', [run('ulnar-motor-adm', 'right', [['wrist', { amplitudeMv: 9 }], ['median-elbow', { latencyMs: 6, amplitudeMv: 3 }]])], 'RIGHT ulnar motor, abductor digiti minimi: amplitude at wrist 9.0 mV (no limit: the adopted sets have none for it), amplitude median nerve at the elbow 3.0 mV.'],
    ['a technique nobody knows', [told({ latencyMs: 3.5 }, 'unheard-of')], 'RIGHT unheard-of: recorded, nothing to judge.'],
    ['a response whose train says nothing', [run('repetitive-ulnar-adm', 'right', [['high-rate', {}, [8]]])], 'RIGHT repetitive stimulation, ulnar, abductor digiti minimi: recorded, nothing to judge.'],
    ['not done', [told({}, 'median-motor-apb', { notDoneBecause: 'plaster cast.' })], `${name}: not done: plaster cast.`],
    ['not examined', [told({}, 'needle-apb', { notDoneBecause: 'anticoagulated' })], 'RIGHT needle, abductor pollicis brevis: not examined: anticoagulated.'],
    ['a needle without a finding', [told({}, 'needle-apb')], 'RIGHT needle, abductor pollicis brevis: nothing recorded.'],
    ['a scale that is not known', [{ ...told({}, 'needle-apb'), rows: [{ id: 'r-0', site: 'muscle', values: {}, ordinals: { fibrillations: '1+', unheardOf: 'much' } }] }], 'RIGHT needle, abductor pollicis brevis: fibrillation potentials 1+, unheardOf much.'],
  ])('%s', (_, runs, text) => expect(texts(runs)[0]).toBe(text))

  it.each<[name: string, celsius: number | null, changes: Partial<Run>, values: Values, text: string]>([
    ['slow in the cold', 28, {}, { latencyMs: 5 }, `${name}: latency at wrist 5.0 ms (cold, not interpretable as slowing); RIGHT hand 28.0 °C, below 32 °C.`],
    ['not slow in the cold', 28, {}, { latencyMs: 3.5 }, `${name}: latency within limits.`],
    ['no temperature', null, {}, { latencyMs: 5 }, `${name}: latency at wrist 5.0 ms (cold, not interpretable as slowing); no temperature of the RIGHT hand.`],
    ['interpreted all the same', 28, { interpretColdBecause: 'could not be warmed' }, { latencyMs: 3.5 }, `${name}: latency at wrist 3.5 ms (within the limit, ≤ 4.4); RIGHT hand 28.0 °C, below 32 °C; interpreted all the same: could not be warmed.`],
    ['interpreted without a temperature', null, { interpretColdBecause: 'could not be warmed' }, { durationMs: 5 }, `${name}: recorded, nothing to judge; no temperature of the RIGHT hand; interpreted all the same: could not be warmed.`],
    ['warm', 33, {}, { latencyMs: 5 }, `${name}: latency at wrist 5.0 ms (above the limit, ≤ 4.4).`],
  ])('%s', (_, celsius, changes, values, text) => {
    const temperatures = celsius === null ? [] : [{ id: 't', segment: 'hand' as const, side: 'right' as const, celsius, warmed: false }]
    expect(texts([told(values, 'median-motor-apb', changes)], { temperatures })[0]).toBe(text)
  })

  it('none of a run that was repeated warm, none of one that is not at hand', () => {
    const temperatures = [{ id: 'c', segment: 'hand' as const, side: 'right' as const, celsius: 28, warmed: false }, { id: 'w', segment: 'hand' as const, side: 'right' as const, celsius: 33, warmed: true }]
    const [cold, warm] = [told({ latencyMs: 5 }, 'median-motor-apb', { id: 'cold', temperatureId: 'c' }), told({ latencyMs: 4 }, 'median-motor-apb', { id: 'warm', temperatureId: 'w', repeats: 'cold' })]
    const assessment = assess(studyWith([cold, warm], { temperatures }))
    expect(assessment.findings.map(one => one.key).filter(key => key.startsWith('run/'))).toEqual(['run/warm'])
    expect(draftFindings({ known: new Map<string, Told>() }, assessment.runs, [])).toEqual([])
  })
})

describe('the sentence of a comparison', () => {
  const compared = (results: Result[], changes: Partial<ComparisonAssessment> = {}): ComparisonAssessment => ({ id: 'c', title: 'RIGHT median against ulnar', side: 'right', runIds: ['a', 'b'], results, ...changes })
  const text = (comparison: ComparisonAssessment) => draftFindings({ known: new Map<string, Told>() }, [] as RunAssessment[], [comparison])[0]?.text
  const sides = { side: undefined, title: 'median motor, RIGHT against LEFT' }
  const difference = (verdict: Verdict, changes: Partial<Result> = {}) => result(verdict, { label: 'difference', print: '0.3', ...changes })
  const missing = (because: string) => difference({ kind: 'none' }, { value: { kind: 'not-computable', because }, print: 'not computable' })
  const inside: Verdict = { kind: 'within', limits: [upper], nearLimit: false }
  it.each<[name: string, comparison: ComparisonAssessment, words: string | undefined]>([
    ['within', compared([difference(inside), difference(inside, { label: 'peak difference', print: '0.2' })]), 'RIGHT median against ulnar: difference 0.3 ms, peak difference 0.2 ms, within limits.'],
    ['near its limit', compared([difference({ ...inside, nearLimit: true })]), 'RIGHT median against ulnar: difference 0.3 ms (within the limit, ≤ 4.4, nearer to it than its measurement uncertainty).'],
    ['above', compared([difference({ kind: 'outside', direction: 'above', limit: upper, limits: [upper], nearLimit: false }), difference(inside)]), 'RIGHT median against ulnar: difference 0.3 ms (above the limit, ≤ 4.4), difference 0.3 ms (within the limit, ≤ 4.4).'],
    ['without a limit', compared([difference({ kind: 'no-limit', because: 'no set adopted here' })]), 'RIGHT median against ulnar: difference 0.3 ms (no limit: no set adopted here).'],
    ['not to be computed: the first reason, with the side in capitals', compared([missing('no left ulnar motor run'), missing('another reason')]), 'RIGHT median against ulnar: not computable: no LEFT ulnar motor run.'],
    ['on the right', compared([missing('no right ulnar motor run')]), 'RIGHT median against ulnar: not computable: no RIGHT ulnar motor run.'],
    ['one of two not to be computed', compared([difference(inside), missing('ulnar: onset missing')]), 'RIGHT median against ulnar: difference 0.3 ms (within the limit, ≤ 4.4), difference not computable: ulnar: onset missing.'],
    ['nothing compared', compared([]), undefined],
    ['sides within', compared([difference(inside)], sides), 'Median motor, RIGHT against LEFT: difference 0.3 ms, within limits.'],
    ['sides without a limit are not told', compared([difference({ kind: 'no-limit', because: 'none' }), difference({ kind: 'none' })], sides), undefined],
    ['sides: what has a limit alone', compared([difference({ kind: 'no-limit', because: 'none' }), difference(inside)], sides), 'Median motor, RIGHT against LEFT: difference 0.3 ms, within limits.'],
    ['sides, one absent', compared([difference({ kind: 'absent', limits: [upper] }, none)], sides), 'Median motor, RIGHT against LEFT: difference no response (limit ≤ 4.4).'],
    ['sides, one cold', compared([difference({ kind: 'cold', because: 'may be masked by cold: RIGHT hand 28.0 °C', limits: [upper], wouldBe: 'within' })], sides), 'Median motor, RIGHT against LEFT: difference 0.3 ms (may be masked by cold).'],
    ['sides beyond their limit', compared([difference({ kind: 'outside', direction: 'above', limit: upper, limits: [upper], nearLimit: false })], sides), 'Median motor, RIGHT against LEFT: difference 0.3 ms (above the limit, ≤ 4.4).'],
  ])('%s', (_, comparison, words) => expect(text(comparison)).toBe(words))

  it('has its key, its runs and a fingerprint that changes with it', () => {
    const [of, ofSides] = draftFindings({ known: new Map<string, Told>() }, [], [compared([difference(inside)]), compared([difference(inside)], { ...sides, id: 'd' })])
    expect(of).toMatchObject({ key: 'compare/right/c', runIds: ['a', 'b'] })
    expect(ofSides).toMatchObject({ key: 'compare/both/d', runIds: ['a', 'b'] })
    expect(of!.fingerprint).not.toBe(ofSides!.fingerprint)
  })
})
