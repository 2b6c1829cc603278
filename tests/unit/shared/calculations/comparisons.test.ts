import { describe, expect, it } from 'vitest'
import { numberOf } from '#shared/calculations/computed-value'
import { defaultPolicy } from '#shared/calculations/types'
import type { Run, RunRow } from '#shared/schemas/study'
import { assess, policyWith, resultOf, resultsOf, run, studyWith } from './study-maker'

const sensory = (technique: string, peakLatencyMs: RunRow['values']['peakLatencyMs'], distanceMm: number, changes: Partial<Run> = {}, site = 'wrist') =>
  run(technique, 'right', [[site, { onsetLatencyMs: typeof peakLatencyMs === 'number' ? Number((peakLatencyMs - 0.7).toFixed(2)) : peakLatencyMs, peakLatencyMs, amplitudeUv: typeof peakLatencyMs === 'number' ? 20 : peakLatencyMs, distanceMm }]], changes)
const motor = (technique: string, side: 'right' | 'left', latencyMs: RunRow['values']['latencyMs'], amplitudeMv: RunRow['values']['amplitudeMv'] = 8, distanceMm = 80) =>
  run(technique, side, [['wrist', { latencyMs, amplitudeMv, distanceMm }]])

describe('median against ulnar', () => {
  const of = (...runs: Run[]) => resultOf(assess(studyWith(runs)), 'compare/right/median-ulnar-motor/motorLatencyDifferenceMs')
  it('keeps a negative difference', () => expect(of(motor('median-motor-apb', 'right', 2.7), motor('ulnar-motor-adm', 'right', 2.9))).toMatchObject({ print: '-0.2', verdict: { kind: 'within' } }))
  it('is a flag when the median response is absent', () => expect(of(motor('median-motor-apb', 'right', 'no-response', 'no-response'), motor('ulnar-motor-adm', 'right', 2.9))).toMatchObject({ print: 'no response', flagged: true, verdict: { kind: 'absent' } }))
  it('has no number when the ulnar response is absent', () => expect(of(motor('median-motor-apb', 'right', 3.5), motor('ulnar-motor-adm', 'right', 'no-response', 'no-response')).value).toEqual({ kind: 'not-computable', because: 'ulnar motor: no response' }))
  it('has no number when the ulnar run is of the other side', () => expect(of(motor('median-motor-apb', 'right', 3.5), motor('ulnar-motor-adm', 'left', 2.9)).value).toEqual({ kind: 'not-computable', because: 'no right ulnar motor run' }))
  it('has no limit over unequal distances', () => expect(of(motor('median-motor-apb', 'right', 3.5), motor('ulnar-motor-adm', 'right', 2.9, 8, 60)).verdict).toEqual({ kind: 'no-limit', because: 'recorded over 80 mm and 60 mm' }))
  it('has no limit over two directions', () => {
    const runs = [sensory('median-sensory-d2', 3.5, 140), sensory('ulnar-sensory-d5', 3.4, 140, { direction: 'orthodromic' })]
    expect(resultOf(assess(studyWith(runs)), 'compare/right/median-ulnar-sensory/peakDifferenceMs').verdict).toEqual({ kind: 'no-limit', because: 'recorded antidromic and orthodromic' })
  })
  it('is not begun by the ulnar run alone', () => expect(assess(studyWith([motor('ulnar-motor-adm', 'right', 2.9)])).comparisons).toEqual([]))
  it('takes the later of two runs', () => {
    const [early, late] = [3.5, 4.0].map((latency, index) => ({ ...motor('median-motor-apb', 'right', latency), id: `m${index}`, recordedAt: `2026-12-02T1${index}:00:00Z` }))
    const ulnar = motor('ulnar-motor-adm', 'right', 2.9)
    expect(of(early as Run, late as Run, ulnar).print).toBe('1.1')
    expect(of(late as Run, early as Run, ulnar).print).toBe('1.1')
  })
})

describe('combined sensory index', () => {
  const palm = [sensory('median-mixed-palm', 2.2, 80, {}, 'palm'), sensory('ulnar-mixed-palm', 2.0, 80, {}, 'palm')]
  const ring = [sensory('median-sensory-d4', 3.7, 140), sensory('ulnar-sensory-d4', 3.3, 140)]
  const thumb = [sensory('median-sensory-d1', 2.8, 100), sensory('radial-sensory-d1', 2.5, 100)]
  const index = (...runs: Run[]) => resultsOf(assess(studyWith(runs), policyWith('other-nerves-and-tests'))).find(result => result.quantity === 'combinedIndexMs')
  it('adds the three, and 0.2 + 0.4 + 0.3 is not above 0.9', () => {
    expect(numberOf(index(...palm, ...ring, ...thumb)?.value)).toBeCloseTo(0.9, 12)
    expect(index(...palm, ...ring, ...thumb)).toMatchObject({ print: '0.9', flagged: false })
  })
  it('needs all three', () => expect(index(...palm, ...ring)?.value).toEqual({ kind: 'not-computable', because: 'no thumb difference' }))
  it('is not begun by one', () => expect(index(...palm)).toBeUndefined())
})

describe('sural to radial', () => {
  const sural = (amplitudeUv: RunRow['values']['amplitudeUv']) => run('sural', 'right', [['calf', { amplitudeUv, distanceMm: 140 }]])
  const radial = (amplitudeUv: RunRow['values']['amplitudeUv'], changes: Partial<Run> = {}) => run('radial-sensory-snuffbox', 'right', [['forearm', { amplitudeUv, distanceMm: 100 }]], changes)
  const ratio = (...runs: Run[]) => resultsOf(assess(studyWith(runs), policyWith('india-adult'))).find(result => result.quantity === 'suralRadialRatio')
  it('is the ratio', () => expect(ratio(sural(6), radial(20))).toMatchObject({ print: '0.30' }))
  it('is 0 when the sural response is absent', () => expect(ratio(sural('no-response'), radial(20))).toMatchObject({ value: { kind: 'value', value: 0 } }))
  it('is not begun by one', () => expect(ratio(sural(6))).toBeUndefined())
  it('has no limit when measured in two ways', () => expect(ratio(sural(6), radial(20, { amplitudeDefinition: 'peak-to-peak' }))?.verdict).toEqual({ kind: 'no-limit', because: 'the amplitudes are measured in two ways' }))
})

it('split hand from three muscles, none without the first dorsal interosseous', () => {
  const runs = [motor('median-motor-apb', 'right', 3.5, 4), motor('ulnar-motor-adm', 'right', 2.9, 8), motor('ulnar-motor-fdi', 'right', 3.9, 6, 100)]
  expect(resultOf(assess(studyWith(runs)), 'compare/right/split-hand/splitHandIndex')).toMatchObject({ print: '3.0', unit: 'mV' })
  expect(resultsOf(assess(studyWith(runs.slice(0, 2)))).some(result => result.quantity === 'splitHandIndex')).toBe(false)
})

describe('the two sides', () => {
  const side = (...runs: Run[]) => assess(studyWith(runs), policyWith('buschbacher-primary-studies')).comparisons.filter(one => one.side === undefined)
  it('are compared where both were recorded', () => {
    const [comparison] = side(motor('ulnar-motor-adm', 'right', 2.9, 9), motor('ulnar-motor-adm', 'left', 3.6, 6))
    expect(comparison?.results.map(result => [result.key.split('/').slice(4).join('/'), result.print])).toEqual([['sideDifferenceMs/latencyMs', '0.7'], ['sideDifferencePercent/amplitudeMv', '33']])
    expect(comparison?.results[0]).toMatchObject({ flagged: true, verdict: { kind: 'outside', limit: { value: 0.6 } } })
  })
  it('an absent response of one side is a flag where the set has a limit', () => {
    const [comparison] = side(motor('ulnar-motor-adm', 'right', 'no-response', 'no-response'), motor('ulnar-motor-adm', 'left', 3.6, 6))
    expect(comparison?.results[0]).toMatchObject({ print: 'no response', flagged: true })
  })
  it('two absent responses have no difference', () => expect(side(motor('ulnar-motor-adm', 'right', 'no-response', 'no-response'), motor('ulnar-motor-adm', 'left', 'no-response', 'no-response'))).toEqual([]))
  it('over unequal distances have no limit', () => {
    const [comparison] = side(motor('ulnar-motor-adm', 'right', 2.9), motor('ulnar-motor-adm', 'left', 3.6, 8, 70))
    expect(comparison?.results[0]?.verdict).toEqual({ kind: 'no-limit', because: 'recorded over 80 mm and 70 mm' })
  })
})

describe('segments', () => {
  const at = (rows: [string, RunRow['values']][]) => assess(studyWith([run('ulnar-motor-adm', 'right', rows, { id: 'u' })])).runs[0]?.results.filter(result => result.quantity === 'velocityMps').map(({ at: place, label, print }) => ({ place, label, print }))
  it('across the elbow only between its neighbours', () => {
    expect(at([['wrist', { latencyMs: 2.9, amplitudeMv: 9, distanceMm: 80 }], ['above-elbow', { latencyMs: 8.1, amplitudeMv: 9, distanceMm: 305 }]])).toEqual([{ place: 'wrist-above-elbow', label: 'velocity, above elbow to wrist', print: '59' }])
  })
  it('in anatomical order whatever the order typed', () => {
    expect(at([['above-elbow', { latencyMs: 8.1, amplitudeMv: 9, distanceMm: 100 }], ['wrist', { latencyMs: 2.9, amplitudeMv: 9, distanceMm: 80 }], ['below-elbow', { latencyMs: 6.4, amplitudeMv: 9, distanceMm: 205 }]])?.map(one => one.place)).toEqual(['forearm', 'across-elbow'])
  })
  it('say what is missing', () => {
    const [result] = assess(studyWith([run('median-motor-apb', 'right', [['wrist', { latencyMs: 3.5, amplitudeMv: 8, distanceMm: 80 }], ['elbow', { latencyMs: 7.5, amplitudeMv: 8 }]], { id: 'm' })])).runs[0]?.results.filter(one => one.quantity === 'velocityMps') ?? []
    expect(result?.value).toEqual({ kind: 'not-computable', because: 'distance missing at elbow' })
  })
  it('a proximal absence is an absence, not a fall of 100 %', () => {
    const assessment = assess(studyWith([run('median-motor-apb', 'right', [['wrist', { latencyMs: 3.5, amplitudeMv: 8, distanceMm: 80 }], ['elbow', { latencyMs: 'no-response', amplitudeMv: 'no-response', distanceMm: 215 }]], { id: 'm' })]))
    expect(resultOf(assessment, 'm/m-1/velocityMps').value).toEqual({ kind: 'not-computable', because: 'no response at elbow' })
    expect(resultOf(assessment, 'm/m-1/amplitudeFallPercent').value).toEqual({ kind: 'absent', absence: 'no-response' })
  })
  it('the distal limit stays at the wrist when the palm was stimulated too', () => {
    const assessment = assess(studyWith([run('median-motor-apb', 'right', [['palm', { latencyMs: 1.8, amplitudeMv: 9, distanceMm: 20 }], ['wrist', { latencyMs: 5.2, amplitudeMv: 6.8, distanceMm: 60 }]], { id: 'm' })]))
    expect(resultOf(assessment, 'm/m-1/latencyMs')).toMatchObject({ flagged: true, verdict: { kind: 'outside', limit: { value: 4.4 } } })
    expect(resultOf(assessment, 'm/m-0/latencyMs').verdict).toEqual({ kind: 'none' })
  })
})

describe('F-waves', () => {
  const motorRun = run('median-motor-apb', 'right', [['wrist', { latencyMs: 3.2, amplitudeMv: 8, distanceMm: 70 }], ['elbow', { latencyMs: 7.2, amplitudeMv: 8, distanceMm: 220 }]], { id: 'm' })
  const series = [25.4, 26, 26.2, 'no-response', 26.4, 26.6, 27, 27.1, 27.4, 28, 28.1, 28.4] as const
  const wave = run('median-f-apb', 'right', [['wrist', { limbLengthMm: 600 }, [...series]]], { id: 'f' })
  const assessment = assess(studyWith([wave, motorRun]), defaultPolicy)
  it.each([
    ['minimumLatencyMs', 25.4], ['maximumLatencyMs', 28.4], ['meanLatencyMs', 26.964], ['persistencePercent', 91.667], ['chronodispersionMs', 3],
    ['fRatio', (25.4 - 3.2 - 1) / 6.4], ['peripheralLatencyMs', 13.8], ['fVelocityMps', 1200 / 21.2], ['fEstimateMs', 2 * 600 / 55 + 1 + 3.2], ['fEstimateDifferenceMs', 25.4 - (2 * 600 / 55 + 4.2)],
  ])('%s from the single responses and the motor run of the nerve, whatever the order of the runs', (quantity, expected) => {
    expect(numberOf(resultOf(assessment, `f/f-0/${quantity}`).value)).toBeCloseTo(expected, 3)
  })
  it('typed numbers stand before the series', () => {
    const typed = assess(studyWith([run('median-f-apb', 'right', [['wrist', { minimumLatencyMs: 25, stimulusCount: 20, responseCount: 9, maximumLatencyMs: 28, mLatencyMs: 3 }, [26, 27]]], { id: 'f' })]), defaultPolicy)
    expect(numberOf(resultOf(typed, 'f/f-0/minimumLatencyMs').value)).toBe(25)
    expect(numberOf(resultOf(typed, 'f/f-0/persistencePercent').value)).toBe(45)
    expect(resultOf(typed, 'f/f-0/chronodispersionMs').value).toEqual({ kind: 'not-computable', because: 'fewer than 10 responses' })
  })
  it('no response to any stimulus is absent, not a latency', () => {
    const none = assess(studyWith([run('median-f-apb', 'right', [['wrist', {}, ['no-response', 'no-response']]], { id: 'f' })]), defaultPolicy)
    expect(resultOf(none, 'f/f-0/minimumLatencyMs').value).toEqual({ kind: 'absent', absence: 'no-response' })
    expect(numberOf(resultOf(none, 'f/f-0/persistencePercent').value)).toBe(0)
  })
})

describe('trains, H and blink', () => {
  it('decrement, increment after exercise and in a fast train', () => {
    const assessment = assess(studyWith([run('repetitive-ulnar-adm', 'right', [['rest', { rateHz: 3 }, [8, 6.9, 6.4, 6.2, 6.3]], ['after-exercise', { rateHz: 3, secondsAfterExercise: 10 }, [12, 11, 11, 10.5]], ['high-rate', { rateHz: 30 }, [2, 3, 5]]], { id: 'r' })]))
    expect(resultOf(assessment, 'r/r-0/decrementPercent')).toMatchObject({ label: 'decrement, at rest', print: '23' })
    expect(resultOf(assessment, 'r/r-1/decrementPercent')).toMatchObject({ label: 'decrement, after exercise, 10 s', print: '13' })
    expect(resultOf(assessment, 'r/r-1/incrementPercent')).toMatchObject({ print: '50' })
    expect(resultOf(assessment, 'r/r-2/incrementPercent')).toMatchObject({ print: '150' })
    expect(resultsOf(assessment).some(result => result.key === 'r/r-2/decrementPercent' || result.key === 'r/r-0/incrementPercent')).toBe(false)
  })
  it('H to M and the expected latency', () => {
    const assessment = assess(studyWith([run('h-reflex-soleus', 'right', [['popliteal-fossa', { mLatencyMs: 5, hLatencyMs: 31, mAmplitudeMv: 12, hAmplitudeMv: 3, legLengthMm: 400 }]], { id: 'h' })]))
    expect(resultOf(assessment, 'h/h-0/hmRatio').print).toBe('0.25')
    expect(resultOf(assessment, 'h/h-0/hExpectedMs').print).toBe('32.7')
  })
  it('R2 of the two eyes', () => {
    const assessment = assess(studyWith([run('blink', 'right', [['supraorbital', { r1Ms: 10.5, r2IpsilateralMs: 33.4, r2ContralateralMs: 31 }]], { id: 'b' })]))
    expect(resultOf(assessment, 'b/b-0/r2DifferenceMs')).toMatchObject({ print: '2.4' })
    expect(assessment.runs[0]?.cold.state).toBe('not-needed')
  })
})
