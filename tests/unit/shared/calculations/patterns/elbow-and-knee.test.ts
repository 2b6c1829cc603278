import { describe, expect, it } from 'vitest'
import type { Run, RunRow } from '#shared/schemas/study'
import { run } from '../study-maker'
import { criterionOf, has, outcome, patternOf, patternsOf, pick, said, sensory, truths, type Limit } from './pattern-maker'

const elbowLimits: readonly Limit[] = [
  ['ulnar-motor-adm', 'velocityMps', 'across-elbow', 'lower', 50],
  ['ulnar-motor-adm', 'latencyMs', 'wrist', 'upper', 3.7],
  ['median-motor-apb', 'latencyMs', 'wrist', 'upper', 4.4],
]

/** Ulnar run with these velocities (m/s) and amplitudes (mV); 220 and 100 mm. */
function ulnar({ forearm = 60, elbow = 56, below = 9, above = 8.8 as RunRow['values']['amplitudeMv'] } = {}, technique = 'ulnar-motor-adm', more: Partial<Run> = {}): Run {
  const [belowMs, aboveMs] = [3 + 220 / forearm, 3 + 220 / forearm + 100 / elbow]
  return run(technique, 'right', [
    ['wrist', { latencyMs: 3, amplitudeMv: 9.2, distanceMm: 80 }],
    ['below-elbow', { latencyMs: belowMs, amplitudeMv: below, distanceMm: 220 }],
    ['above-elbow', { latencyMs: above === 'no-response' ? 'no-response' : aboveMs, ...(above !== undefined && { amplitudeMv: above }), distanceMm: 100 }],
  ], more)
}
const elbow = (runs: Run[], limits = elbowLimits) => patternOf('ulnar-elbow', runs, { limits }, 'right')
const elbow1999 = (runs: Run[], limits = elbowLimits) => patternOf('ulnar-elbow-parameter-1999', runs, { limits }, 'right')

describe('ulnar nerve at the elbow', () => {
  it('normal', () => expect(outcome(elbow([ulnar()]))).toBe('not-met: 0 of 3 findings, 2 asked for'))
  it('a drop of 12 m/s alone: above 10, within 15, so one finding at most', () => {
    const runs = [ulnar({ forearm: 64, elbow: 52 })]
    expect(truths(elbow(runs))).toMatchObject({ 'adm-velocity': 'not-met', 'adm-drop': 'not-met', 'adm-amplitude': 'not-met' })
    expect(truths(elbow1999(runs))).toMatchObject({ 'adm-slow': 'not-met', 'adm-drop': 'met', 'adm-amplitude': 'not-met', 'adm-published-drop': 'not-met' })
    expect(outcome(elbow1999(runs))).toBe('not-met: 1 of 3 findings, 2 asked for')
  })
  it('two concordant findings', () => {
    expect(outcome(elbow([ulnar({ forearm: 62, elbow: 40 })]))).toBe('met: 2 of 3 findings')
    expect(outcome(elbow([ulnar({ forearm: 62, elbow: 49, above: 7 })]))).toBe('met: 2 of 3 findings')
    expect(said(elbow([ulnar({ forearm: 62, elbow: 40 })]), 'adm-velocity')).toBe('met: 40.0 m/s, limit 50 m/s')
  })
  it('exactly on each bar is not beyond it', () => {
    const pattern = elbow1999([run('ulnar-motor-adm', 'right', [
      ['wrist', { latencyMs: 3, amplitudeMv: 10, distanceMm: 80 }], ['below-elbow', { latencyMs: 7, amplitudeMv: 10, distanceMm: 240 }], ['above-elbow', { latencyMs: 9, amplitudeMv: 8, distanceMm: 100 }],
    ])])
    expect(truths(pattern)).toMatchObject({ 'adm-slow': 'not-met', 'adm-drop': 'not-met', 'adm-amplitude': 'not-met' })
    expect(said(pattern, 'adm-amplitude')).toBe('not-met: 20.0 %, limit 20 %')
    // Ratio 0.82 is a fall of 18 %, drop 15 m/s.
    const own = elbow([ulnar({ forearm: 65, elbow: 50, below: 10, above: 8.2 })])
    expect(truths(own)).toMatchObject({ 'adm-velocity': 'not-met', 'adm-drop': 'not-met', 'adm-amplitude': 'not-met' })
    expect(truths(elbow([ulnar({ forearm: 65.2, elbow: 49.9, below: 10, above: 8.1 })]))).toMatchObject({ 'adm-velocity': 'met', 'adm-drop': 'met', 'adm-amplitude': 'met' })
  })
  it('the limits of the sets in use stand before the published drop', () => {
    const own: Limit[] = [...elbowLimits, ['ulnar-motor-adm', 'velocityDropMps', 'across-elbow', 'upper', 20]]
    const runs = [ulnar({ forearm: 64, elbow: 47 })]
    expect(said(elbow(runs), 'adm-drop')).toBe('met: 17.0 m/s, limit 15 m/s')
    expect(said(elbow(runs, own), 'adm-drop')).toBe('not-met: 17.0 m/s, limit 20 m/s')
    expect(said(elbow1999(runs, own), 'adm-published-drop')).toBe('met: 17.0 m/s, limit 15 m/s')
  })
  it('a response lost over the elbow is a fall of all of it', () => {
    const pattern = elbow([ulnar({ above: 'no-response' })])
    expect(said(pattern, 'adm-amplitude')).toBe('met: no response above, 100 %')
    expect(outcome(pattern)).toBe('not-assessable: 1 of 3 findings, others not assessable')
  })
  it('findings in two muscles are concordant', () => {
    const runs = [ulnar({ above: 7 }), ulnar({ above: 7 }, 'ulnar-motor-fdi')]
    const pattern = elbow(runs)
    expect(truths(pattern)).toMatchObject({ 'adm-amplitude': 'met', 'fdi-amplitude': 'met', 'fdi-velocity': 'not-assessable' })
    expect(outcome(pattern)).toBe('met: 2 of 6 findings')
    expect(criterionOf(pattern, 'fdi-velocity').because).toMatch(/^no limit: /)
    expect(pattern.runIds).toEqual(['right-ulnar-motor-adm', 'right-ulnar-motor-fdi'])
  })
  it('other nerves outside their limits are said beside it', () => {
    const slowMedian = run('median-motor-apb', 'right', [['wrist', { latencyMs: 5, amplitudeMv: 8, distanceMm: 80 }]])
    const normalMedian = run('median-motor-apb', 'right', [['wrist', { latencyMs: 4, amplitudeMv: 8, distanceMm: 80 }]])
    const runs = [ulnar({ forearm: 62, elbow: 40 })]
    expect(outcome(elbow([...runs, slowMedian]))).toBe('met: 2 of 3 findings; other nerves are outside their limits too')
    expect(said(elbow([...runs, slowMedian]), 'others')).toBe('not-met: outside: RIGHT median motor')
    expect(said(elbow([...runs, normalMedian]), 'others')).toBe('met: runs within their limits: 1')
    expect(said(elbow(runs), 'others')).toBe('not-assessable:  [no other nerve judged by a limit]')
    // The same nerve of the other side is another nerve.
    const left = { ...ulnar(), id: 'left-ulnar', side: 'left' as const, rows: ulnar().rows.map(row => ({ ...row, values: { ...row.values, ...(row.site === 'wrist' && { latencyMs: 3.9 }) } })) }
    expect(said(elbow([...runs, left]), 'others')).toBe('not-met: outside: LEFT ulnar motor')
    expect(outcome(elbow([ulnar(), slowMedian]))).toBe('not-met: 0 of 3 findings, 2 asked for')
  })
  it('the elbow position is asked for', () => {
    const position = (degrees?: number) => said(elbow1999([ulnar({}, 'ulnar-motor-adm', degrees === undefined ? {} : { elbowFlexionDegrees: degrees })]), 'position')
    expect([position(), position(69), position(70), position(90), position(91)]).toEqual([
      'not-assessable:  [elbow flexion not noted]', 'not-met: 69 degrees', 'met: 70 degrees', 'met: 90 degrees', 'not-met: 91 degrees',
    ])
  })
  it('is not shown where the nerve was not stimulated above the elbow', () => {
    const short = { ...ulnar(), rows: ulnar().rows.slice(0, 2) }
    const patterns = patternsOf([short], { limits: elbowLimits })
    expect([has(patterns, 'ulnar-elbow', 'right'), has(patterns, 'ulnar-elbow-parameter-1999', 'right')]).toEqual([false, false])
  })
  it('cold', () => {
    const pattern = pick(patternsOf([ulnar({ forearm: 62, elbow: 40, above: 5 })], { limits: elbowLimits, study: { temperatures: [] } }), 'ulnar-elbow', 'right')
    expect(outcome(pattern)).toBe('not-assessable: 0 of 3 findings, others not assessable')
    expect(said(pattern, 'adm-amplitude')).toBe('not-assessable:  [cold: no temperature of the RIGHT hand]')
  })
})

const kneeLimits: readonly Limit[] = [
  ['fibular-motor-edb', 'velocityMps', 'across-fibular-head', 'lower', 42],
  ['fibular-motor-ta', 'velocityMps', 'across-fibular-head', 'lower', 43],
  ['sural', 'amplitudeUv', 'calf', 'lower', 4],
  ['superficial-fibular', 'amplitudeUv', 'lower-leg', 'lower', 5],
]
const edb = ({ leg = 48, head = 46, below = 5, above = 4.8 } = {}) => run('fibular-motor-edb', 'right', [
  ['ankle', { latencyMs: 4.5, amplitudeMv: 5.2, distanceMm: 80 }],
  ['below-fibular-head', { latencyMs: 4.5 + 320 / leg, amplitudeMv: below, distanceMm: 320 }],
  ['above-fibular-head', { latencyMs: 4.5 + 320 / leg + 100 / head, amplitudeMv: above, distanceMm: 100 }],
])
const ta = ({ head = 50, below = 5, above = 4.8 } = {}) => run('fibular-motor-ta', 'right', [
  ['below-fibular-head', { latencyMs: 3, amplitudeMv: below, distanceMm: 100 }],
  ['above-fibular-head', { latencyMs: 3 + 100 / head, amplitudeMv: above, distanceMm: 100 }],
])
const knee = (runs: Run[], limits: readonly Limit[] = kneeLimits) => patternOf('fibular-knee', runs, { limits }, 'right')

describe('fibular nerve at the knee', () => {
  it('normal', () => expect(outcome(knee([edb(), ta()]))).toBe('not-met: 0 of 5 findings, 2 asked for'))
  it('one finding alone is not enough', () => expect(outcome(knee([edb({ above: 3 })]))).toBe('not-met: 1 of 3 findings, 2 asked for'))
  it('slowing and fall, the sural nerve spared', () => {
    const pattern = knee([edb({ leg: 46, head: 30, above: 2 }), sensory('sural', 'right', { amplitude: 9 }), sensory('superficial-fibular', 'right', { onset: 'no-response', amplitude: 'no-response' })])
    expect(outcome(pattern)).toBe('met: 3 of 3 findings')
    expect(truths(pattern)).toEqual({ 'edb-velocity': 'met', 'edb-drop': 'met', 'edb-amplitude': 'met', 'superficial-fibular': 'met', 'sural-spared': 'met' })
    expect(said(pattern, 'edb-amplitude')).toBe('met: 60.0 %, limit 25 %')
  })
  it('one fall in each muscle', () => {
    const pattern = knee([edb({ above: 3 }), ta({ above: 3.9 })])
    expect(truths(pattern)).toMatchObject({ 'edb-amplitude': 'met', 'ta-amplitude': 'met' })
    expect(outcome(pattern)).toBe('met: 2 of 5 findings')
  })
  it('exactly on each bar is not beyond it', () => {
    const pattern = knee([edb({ leg: 52, head: 42, below: 4, above: 3 }), ta({ head: 43, below: 5, above: 4 })])
    expect(truths(pattern)).toMatchObject({ 'edb-velocity': 'not-met', 'edb-drop': 'not-met', 'edb-amplitude': 'not-met', 'ta-velocity': 'not-met', 'ta-amplitude': 'not-met' })
  })
  it('the limits of the sets in use stand before the published ones', () => {
    const own: Limit[] = [...kneeLimits, ['fibular-motor-edb', 'velocityDropMps', 'across-fibular-head', 'upper', 6], ['fibular-motor-edb', 'amplitudeFallPercent', 'across-fibular-head', 'upper', 32]]
    expect(truths(knee([edb({ leg: 52, head: 44, above: 3.5 })], own))).toMatchObject({ 'edb-drop': 'met', 'edb-amplitude': 'not-met' })
    expect(truths(knee([edb({ leg: 52, head: 44, above: 3.5 })]))).toMatchObject({ 'edb-drop': 'not-met', 'edb-amplitude': 'met' })
  })
  it('a sural response outside its limit is said', () => {
    expect(outcome(knee([edb({ leg: 46, head: 30, above: 2 }), sensory('sural', 'right', { amplitude: 2 })]))).toBe('met: 3 of 3 findings; sural nerve outside its limits too')
    expect(said(knee([edb()]), 'sural-spared')).toBe('not-assessable:  [not recorded]')
  })
  it('is not shown where the nerve was not stimulated above the head', () => {
    expect(has(patternsOf([{ ...edb(), rows: edb().rows.slice(0, 2) }], { limits: kneeLimits }), 'fibular-knee', 'right')).toBe(false)
  })
})
