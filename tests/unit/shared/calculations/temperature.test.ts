import { describe, expect, it } from 'vitest'
import { assessStudy } from '#shared/calculations/assess-study'
import { defaultPolicy } from '#shared/calculations/types'
import type { LimbTemperature, Run } from '#shared/schemas/study'
import { ndtfPolicy } from '../../../fixtures/carpal-tunnel-study'
import { adopt, limitRow, tableOf } from './limit-fixtures'
import { assess, codes, resultOf, run, studyWith } from './study-maker'

const slowAndSmall = (changes: Partial<Run> = {}) => run('median-motor-apb', 'right', [
  ['wrist', { latencyMs: 5.2, amplitudeMv: 6.8, distanceMm: 80 }], ['elbow', { latencyMs: 10.5, amplitudeMv: 6.5, distanceMm: 215 }],
], changes)
const hand = (celsius: number, changes: Partial<LimbTemperature> = {}): LimbTemperature => ({ id: 't', segment: 'hand', side: 'right', celsius, warmed: false, ...changes })
const judged = (temperatures: LimbTemperature[], changes: Partial<Run> = {}, policy = ndtfPolicy) => assess(studyWith([slowAndSmall({ id: 'r', ...changes })], { temperatures }), policy)

describe('a cold hand', () => {
  const cold = judged([hand(29)])
  it('keeps slowness from being read', () => {
    expect(resultOf(cold, 'r/r-0/latencyMs').verdict).toMatchObject({ kind: 'cold', wouldBe: 'above', because: 'cold, not interpretable as slowing: RIGHT hand 29.0 °C, below 32 °C' })
    expect(resultOf(cold, 'r/r-1/velocityMps').verdict).toMatchObject({ kind: 'cold', wouldBe: 'below' })
  })
  it('may hide a lost amplitude', () => {
    expect(resultOf(cold, 'r/r-0/amplitudeMv').verdict).toMatchObject({ kind: 'cold', wouldBe: 'within', because: 'may be masked by cold: RIGHT hand 29.0 °C, below 32 °C' })
  })
  it('has no flag, and asks for a warm repeat', () => {
    expect(cold.flagged).toEqual([])
    expect(codes(cold)).toContain('check cold')
    expect(cold.remarks.find(remark => remark.code === 'cold')?.suggestion).toMatchObject({ addTechnique: 'median-motor-apb', side: 'right' })
  })
  it('does not excuse a small amplitude or an absent response', () => {
    const small = assess(studyWith([run('median-motor-apb', 'right', [['wrist', { latencyMs: 'no-response', amplitudeMv: 2, distanceMm: 80 }]], { id: 'r' })], { temperatures: [hand(29)] }))
    expect(resultOf(small, 'r/r-0/amplitudeMv').verdict).toMatchObject({ kind: 'outside', direction: 'below' })
    expect(resultOf(small, 'r/r-0/latencyMs')).toMatchObject({ verdict: { kind: 'absent' }, flagged: true })
  })
  it('leaves a latency within its limit within', () => {
    const quick = assess(studyWith([run('median-motor-apb', 'right', [['wrist', { latencyMs: 3.5, amplitudeMv: 8, distanceMm: 80 }]], { id: 'r' })], { temperatures: [hand(29)] }))
    expect(resultOf(quick, 'r/r-0/latencyMs').verdict.kind).toBe('within')
  })
  it('is said in the text', () => {
    expect(cold.findings[0]?.text).toBe('RIGHT median motor, abductor pollicis brevis: latency at wrist 5.2 ms (cold, not interpretable as slowing), amplitude at wrist 6.8 mV (may be masked by cold), velocity elbow to wrist 41 m/s (cold, not interpretable as slowing); RIGHT hand 29.0 °C, below 32 °C.')
  })
  it('counts no limit for chance where cold keeps it from being read', () => expect(cold.chance.limitsApplied).toBe(0))
  it('may be interpreted by the reader with a reason that is printed', () => {
    const read = judged([hand(29)], { interpretColdBecause: 'warmed for an hour' })
    expect(read.flagged).toEqual(['r/r-0/latencyMs', 'r/r-1/velocityMps'])
    expect(read.runs[0]?.cold).toMatchObject({ state: 'cold', because: 'RIGHT hand 29.0 °C, below 32 °C; interpreted all the same: warmed for an hour' })
    expect(read.findings[0]?.text).toContain('interpreted all the same: warmed for an hour')
  })
})

it('exactly at the threshold is warm', () => expect(judged([hand(32)]).runs[0]?.cold.state).toBe('warm'))
it('no temperature counts as cold, and is asked for once per limb', () => {
  const unknown = assess(studyWith([slowAndSmall({ id: 'r' }), run('ulnar-motor-adm', 'right', [['wrist', { latencyMs: 4, amplitudeMv: 9, distanceMm: 80 }]])], { temperatures: [] }))
  expect(unknown.runs[0]?.cold).toMatchObject({ state: 'unknown', because: 'no temperature of the RIGHT hand' })
  expect(unknown.flagged).toEqual([])
  expect(codes(unknown).filter(code => code.includes('temperature-missing'))).toEqual(['check temperature-missing/right-hand'])
})
it('the other hand is no help', () => expect(judged([hand(33, { side: 'left' })]).runs[0]?.cold.state).toBe('unknown'))

describe('threshold: the stricter of policy and set', () => {
  const foot = (celsius: number, policy = ndtfPolicy) => assess(studyWith([run('tibial-motor-ah', 'right', [['ankle', { latencyMs: 5, amplitudeMv: 8, distanceMm: 80 }]])], { temperatures: [hand(celsius, { segment: 'foot' })] }), policy).runs[0]?.cold
  it('the set asks for 31 °C where the policy asks for 30', () => expect(foot(30.5)).toMatchObject({ state: 'cold', thresholdC: 31 }))
  it('without the set the policy stands', () => expect(foot(30.5, defaultPolicy)).toMatchObject({ state: 'warm', thresholdC: 30 }))
  it('a stricter policy stands above the set', () => expect(foot(31.5, { ...ndtfPolicy, footMinimumC: 32 })).toMatchObject({ state: 'cold', thresholdC: 32 }))
  it('a set adopted for other techniques does not count', () => expect(foot(30.5, { ...ndtfPolicy, adopted: ndtfPolicy.adopted.map(one => ({ ...one, techniques: ['sural'] })) })).toMatchObject({ state: 'warm' }))
})

describe('which reading', () => {
  const at = (id: string, celsius: number, time: string) => hand(celsius, { id, at: `2026-12-02T${time}:00Z` })
  it.each<[string, LimbTemperature[], Partial<Run>, number]>([
    ['the latest of the limb', [at('a', 29, '10:00'), at('b', 33, '10:40')], {}, 33],
    ['the latest before the run, not one that came later', [at('a', 29, '10:00'), at('b', 33, '10:40')], { recordedAt: '2026-12-02T10:10:00Z' }, 29],
    ['the first after it when none came before', [at('a', 29, '10:20'), at('b', 33, '10:40')], { recordedAt: '2026-12-02T10:10:00Z' }, 29],
    ['the one the run names', [at('a', 29, '10:00'), at('b', 33, '10:40')], { temperatureId: 'a' }, 29],
    ['not one of another limb, though named', [at('a', 29, '10:00'), hand(35, { id: 'foot', segment: 'foot' })], { temperatureId: 'foot' }, 29],
    ['one with a time before one without', [hand(29, { id: 'a' }), at('b', 33, '10:00'), hand(28, { id: 'c' })], {}, 33],
    ['the last in the list without any times', [hand(29, { id: 'a' }), hand(33, { id: 'b' })], {}, 33],
  ])('%s', (_, temperatures, changes, expected) => expect(judged(temperatures, changes).runs[0]?.cold.celsius).toBe(expected))
  it('a named reading of another limb is questioned', () => expect(codes(judged([hand(33), hand(35, { id: 'foot', segment: 'foot' })], { temperatureId: 'foot' }))).toContain('check temperature-elsewhere'))
})

describe('a warm repeat', () => {
  const cold = slowAndSmall({ id: 'cold', temperatureId: 'before' })
  const warm = run('median-motor-apb', 'right', [['wrist', { latencyMs: 4.2, amplitudeMv: 6.9, distanceMm: 80 }], ['elbow', { latencyMs: 8.1, amplitudeMv: 6.6, distanceMm: 215 }]], { id: 'warm', repeats: 'cold', temperatureId: 'after' })
  const readings = [hand(29, { id: 'before' }), hand(33, { id: 'after', warmed: true })]
  const both = assess(studyWith([cold, warm], { temperatures: readings }))
  it('supersedes the cold run, which is kept without flags and sentence', () => {
    expect(both.runs.map(one => one.supersededBy)).toEqual(['warm', undefined])
    expect(both.runs[0]?.results.every(result => result.verdict.kind === 'superseded' && !result.flagged)).toBe(true)
    expect(both.findings.map(one => one.key)).toEqual(['run/warm', 'compare/right/median-ulnar-motor'])
    expect(resultOf(both, 'warm/warm-0/latencyMs').verdict.kind).toBe('within')
  })
  it('is questioned no more', () => expect(codes(both).filter(code => code.startsWith('check'))).toEqual([]))
  it('that is cold again supersedes nothing', () => {
    const again = assess(studyWith([cold, { ...warm, temperatureId: 'before' }], { temperatures: readings }))
    expect(again.runs.map(one => one.supersededBy)).toEqual([undefined, undefined])
  })
  it('of the other side supersedes nothing', () => {
    const other = assess(studyWith([cold, { ...warm, side: 'left', temperatureId: undefined }], { temperatures: [...readings, hand(33, { id: 'l', side: 'left' })] }))
    expect(other.runs[0]?.supersededBy).toBeUndefined()
  })
  it('that was not done supersedes nothing', () => {
    const undone = assess(studyWith([cold, { ...warm, notDoneBecause: 'went home' }], { temperatures: readings }))
    expect(undone.runs[0]?.supersededBy).toBeUndefined()
    expect(undone.runs[1]?.notDone).toBe('not done: went home')
  })
})

it('an absent decrement may be masked by cold, and a present one is flagged', () => {
  const table = tableOf([limitRow({ technique: 'repetitive-ulnar-adm', quantity: 'decrementPercent', at: null, unit: '%', value: 10 })])
  const verdictOf = (fourth: number) => {
    const train = run('repetitive-ulnar-adm', 'right', [['rest', { rateHz: 3 }, [8, 7.9, 7.8, fourth, 7.8]]], { id: 'r' })
    const { runs } = assessStudy(studyWith([train], { temperatures: [hand(29)] }), [table], { ...defaultPolicy, adopted: [adopt(table)] })
    return runs[0]?.results.find(result => result.quantity === 'decrementPercent')?.verdict
  }
  expect(verdictOf(7.8)).toMatchObject({ kind: 'cold', wouldBe: 'within', because: 'may be masked by cold: RIGHT hand 29.0 °C, below 32 °C' })
  expect(verdictOf(6)).toMatchObject({ kind: 'outside', direction: 'above' })
})

describe('a difference of the sides', () => {
  const table = tableOf([limitRow({ technique: 'side-difference/median-motor-apb', quantity: 'sideDifferenceMs', at: 'latencyMs', value: 1 })])
  const verdictOf = (left: number, leftCelsius: number) => {
    const pair = [slowAndSmall({ id: 'r' }), run('median-motor-apb', 'left', [['wrist', { latencyMs: left, amplitudeMv: 7, distanceMm: 80 }]], { id: 'l' })]
    const study = studyWith(pair, { temperatures: [hand(29), hand(leftCelsius, { id: 'l', side: 'left' })] })
    const { comparisons } = assessStudy(study, [table], { ...defaultPolicy, adopted: [adopt(table)] })
    return comparisons.find(one => one.id === 'side-difference/median-motor-apb')?.results[0]?.verdict
  }
  it('of a cold and a warm side is not read either way', () => {
    expect(verdictOf(3.9, 33)).toMatchObject({ kind: 'cold', wouldBe: 'above' })
    expect(verdictOf(5.0, 33)).toMatchObject({ kind: 'cold', wouldBe: 'within', because: 'may be masked by cold: RIGHT hand 29.0 °C, below 32 °C' })
  })
  it('of two cold sides may be within', () => expect(verdictOf(5.0, 29)).toMatchObject({ kind: 'within' }))
})

it('a corrected value stands beside the measured one, only where turned on', () => {
  const off = judged([hand(29)])
  const on = judged([hand(29)], {}, { ...ndtfPolicy, temperatureCorrection: true })
  expect(off.runs[0]?.results.some(result => result.quantity === 'correctedVelocityMps')).toBe(false)
  expect(resultOf(on, 'r/r-1/correctedVelocityMps')).toMatchObject({ print: '48', verdict: { kind: 'none' }, flagged: false })
  expect(resultOf(on, 'r/r-1/velocityMps')).toMatchObject({ print: '41' })
  expect(resultOf(on, 'r/r-0/correctedLatencyMs')).toMatchObject({ print: '4.2', verdict: { kind: 'none' }, flagged: false })
  expect(resultOf(on, 'r/r-0/latencyMs')).toMatchObject({ print: '5.2' })
})

it('a short warming is noted, a long one not', () => {
  const warming = (time: string) => codes(judged([hand(28, { id: 'a', at: '2026-12-02T10:00:00Z' }), hand(33, { id: 'b', warmed: true, at: `2026-12-02T${time}:00Z` })]))
  expect(warming('10:15')).toContain('note warming-short/b')
  expect(warming('10:25').some(code => code.includes('warming-short'))).toBe(false)
})
it('a hot probe is questioned', () => expect(codes(judged([hand(39)]))).toContain('check temperature-high/t'))
