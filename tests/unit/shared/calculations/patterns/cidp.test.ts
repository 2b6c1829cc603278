import { describe, expect, it } from 'vitest'
import type { Side } from '#shared/schemas/common'
import type { Run } from '#shared/schemas/study'
import { run } from '../study-maker'
import { cardLimits, criterionOf, has, motorNerve, outcome, patternOf, patternsOf, said, sensory, truths, type Given, type Limit, type Motor, type NerveNumbers } from './pattern-maker'

type Study = Partial<Record<Motor, NerveNumbers>>
const runsOf = (study: Study, side: Side = 'right') => (Object.entries(study) as [Motor, NerveNumbers][]).flatMap(([nerve, numbers]) => motorNerve(nerve, side, numbers))
const cidp = (id: 'cidp-efns-pns-2010' | 'cidp-ean-pns-2021') => (study: Study | Run[], given: Given = {}) =>
  patternOf(id, Array.isArray(study) ? study : runsOf(study), { limits: cardLimits, ...given })
const of2010 = cidp('cidp-efns-pns-2010')
const of2021 = cidp('cidp-ean-pns-2021')

/** Normal in all that both sets look at; limits are those of the card. */
const normal: Record<Motor, NerveNumbers> = {
  median: { dml: 4, mcv: 52, amp: 8, proximalAmp: 7.8, f: 28, duration: 5.5, proximalDuration: 5.8, filterHz: 20 },
  ulnar: { dml: 3, mcv: 55, amp: 8, proximalAmp: 7.8, f: 28, duration: 5.5, proximalDuration: 5.8, filterHz: 20 },
  fibular: { dml: 5, mcv: 45, amp: 4, proximalAmp: 3.8, f: 50, duration: 5.5, proximalDuration: 5.8, filterHz: 20 },
  tibial: { dml: 5, mcv: 44, amp: 8, proximalAmp: 6.8, f: 50, duration: 5.5, proximalDuration: 6, filterHz: 20 },
}
const but = (changes: Study): Study => Object.fromEntries((Object.keys(normal) as Motor[]).map(nerve => [nerve, { ...normal[nerve], ...changes[nerve] }]))

describe('CIDP, EFNS/PNS 2010', () => {
  const rows: [name: string, changes: Study, ids: Record<string, string>, label: string][] = [
    ['normal', {}, { a: 'not-met', b: 'not-met', c: 'not-met', d: 'not-met', e: 'not-met', f: 'not-met', g: 'not-met', probable: 'not-met', possible: 'not-met' }, 'not-met: not met'],
    ['latency exactly 150 % in two', { ulnar: { dml: 5.4 }, tibial: { dml: 9 } }, { a: 'met', possible: 'met' }, 'met: definite (a)'],
    ['latency under 150 % in one of two', { ulnar: { dml: 5.4 }, tibial: { dml: 8.99 } }, { a: 'not-met', possible: 'met' }, 'met: possible: in one nerve'],
    ['the median latency stays open', { median: { dml: 7 }, ulnar: { dml: 5.4 } }, { a: 'not-assessable' }, 'met: possible: in one nerve, definite not assessable'],
    ['velocity exactly 70 % in two', { ulnar: { mcv: 35 }, fibular: { mcv: 28.7 } }, { b: 'met' }, 'met: definite (b)'],
    ['velocity above 70 % in one of two', { ulnar: { mcv: 35 }, fibular: { mcv: 28.8 } }, { b: 'not-met', possible: 'met' }, 'met: possible: in one nerve'],
    ['F exactly 130 % in two', { ulnar: { f: 41.6 }, tibial: { f: 75.4 } }, { c: 'met' }, 'met: definite (c)'],
    ['F 130 % is not enough under 80 % of the amplitude', { ulnar: { f: 41.6 }, tibial: { f: 75.4, amp: 3.1, proximalAmp: 3 } }, { c: 'not-met' }, 'met: possible: in one nerve'],
    ['F 150 % is', { ulnar: { f: 41.6 }, tibial: { f: 87, amp: 3.1, proximalAmp: 3 } }, { c: 'met' }, 'met: definite (c)'],
    ['exactly 80 % of the amplitude is not under it', { ulnar: { f: 41.6 }, tibial: { f: 75.4, amp: 3.2, proximalAmp: 3 } }, { c: 'met' }, 'met: definite (c)'],
    ['no F in two, nothing else', { ulnar: { f: 'no-response' }, tibial: { f: 'no-response' } }, { d: 'not-met', possible: 'not-met' }, 'not-met: not met'],
    ['no F in two, another parameter in a third', { ulnar: { f: 'no-response' }, tibial: { f: 'no-response' }, fibular: { mcv: 28 } }, { d: 'met' }, 'met: definite (d)'],
    ['no F in two, another parameter in one of these', { ulnar: { f: 'no-response', mcv: 34 }, tibial: { f: 'no-response' } }, { d: 'not-met' }, 'met: possible: in one nerve'],
    ['no F where the response is under 20 % does not count', { ulnar: { f: 'no-response' }, tibial: { f: 'no-response', amp: 0.79, proximalAmp: 0.7 }, fibular: { mcv: 28 } }, { d: 'not-met' }, 'met: possible: in one nerve'],
    ['no F at exactly 20 % does', { ulnar: { f: 'no-response' }, tibial: { f: 'no-response', amp: 0.8, proximalAmp: 0.7 }, fibular: { mcv: 28 } }, { d: 'met' }, 'met: definite (d)'],
    ['fall of exactly 50 % in two', { ulnar: { proximalAmp: 4 }, tibial: { proximalAmp: 4 } }, { e: 'met' }, 'met: definite (e)'],
    ['fall of 50 % in one and another parameter in another', { ulnar: { proximalAmp: 4 }, fibular: { mcv: 28 } }, { e: 'met' }, 'met: definite (e)'],
    ['fall of 50 % and another parameter in the same nerve', { ulnar: { proximalAmp: 4, mcv: 30 } }, { e: 'not-met', possible: 'met' }, 'met: possible: in one nerve'],
    ['fall of 30 % in two is probable', { ulnar: { proximalAmp: 5.6 }, median: { proximalAmp: 5.6 } }, { e: 'not-met', probable: 'met' }, 'met: probable'],
    ['fall of 29.9 % is not', { ulnar: { proximalAmp: 5.61 }, median: { proximalAmp: 5.6 } }, { probable: 'not-met', possible: 'met' }, 'met: possible: in one nerve'],
    ['the tibial nerve does not count for probable', { ulnar: { proximalAmp: 5.6 }, tibial: { proximalAmp: 5.6 } }, { probable: 'not-met' }, 'met: possible: in one nerve'],
    ['fall where the response is under 20 % does not count', { ulnar: { proximalAmp: 4 }, median: { amp: 0.8, proximalAmp: 0.1 } }, { e: 'not-met' }, 'met: possible: in one nerve'],
    ['a lost response is a fall', { ulnar: { proximalAmp: 'no-response', mcv: undefined as unknown as number }, median: { proximalAmp: 4 } }, { e: 'met' }, 'met: definite (e)'],
    ['duration rise above 30 % in two', { ulnar: { proximalDuration: 7.2 }, tibial: { proximalDuration: 7.2 } }, { f: 'met' }, 'met: definite (f)'],
    ['duration rise of exactly 30 % is not', { ulnar: { duration: 5, proximalDuration: 6.5 }, tibial: { proximalDuration: 7.2 } }, { f: 'not-met' }, 'met: possible: in one nerve'],
    ['distal duration at its limit and another parameter in another nerve', { ulnar: { duration: 6.7, proximalDuration: 6.9 }, fibular: { mcv: 28 } }, { g: 'met' }, 'met: definite (g)'],
    ['distal duration under its limit', { ulnar: { duration: 6.69, proximalDuration: 6.9 }, fibular: { mcv: 28 } }, { g: 'not-met' }, 'met: possible: in one nerve'],
    ['distal duration alone', { ulnar: { duration: 6.7, proximalDuration: 6.9 } }, { g: 'not-met', possible: 'met' }, 'met: possible: in one nerve'],
    ['long in two nerves: each is the other\'s other', { ulnar: { duration: 9, proximalDuration: 9.3 }, median: { duration: 9, proximalDuration: 9.3 } }, { g: 'not-met' }, 'met: possible: in one nerve'],
  ]
  for (const [name, changes, wanted, label] of rows) {
    it(`${name}: ${label}`, () => {
      const pattern = of2010(but(changes))
      expect(truths(pattern)).toMatchObject(wanted)
      expect(outcome(pattern)).toBe(label)
    })
  }

  it.each([['median', 6.6], ['ulnar', 6.7], ['fibular', 7.6], ['tibial', 8.8]] as const)('duration limit of the %s nerve: %d ms', (nerve, limit) => {
    const other: Motor = nerve === 'fibular' ? 'ulnar' : 'fibular'
    const at = (duration: number) => said(of2010(but({ [nerve]: { duration, proximalDuration: duration }, [other]: { mcv: 25 } })), 'g')
    expect(at(limit)).toMatch(/^met/)
    expect(at(limit - 0.01)).toMatch(/^not-met/)
  })

  it('the duration rule needs the low-frequency filter, and one that has limits', () => {
    const g = (filterHz: number | undefined) => of2010(but({ ulnar: { duration: 9, proximalDuration: 9, filterHz }, median: { filterHz }, tibial: { filterHz }, fibular: { mcv: 28, filterHz } } as Study))
    expect(criterionOf(g(undefined), 'g')).toMatchObject({ result: 'not-assessable', because: expect.stringMatching(/low-frequency filter not noted/) })
    expect(criterionOf(g(2), 'g')).toMatchObject({ result: 'not-assessable', because: expect.stringMatching(/no published limit for a filter of 2 Hz/) })
    expect(criterionOf(g(20), 'g')).toMatchObject({ result: 'met' })
  })

  it('says numbers and shares of every nerve', () => {
    expect(said(of2010(but({ ulnar: { dml: 5.6 }, tibial: { dml: 9.2 } })), 'a')).toBe('met: RIGHT ulnar 5.6 ms, 156 % of 3.6 ms; RIGHT tibial 9.2 ms, 153 % of 6 ms; RIGHT median 4.0 ms, 89 % of 4.5 ms; RIGHT fibular 5.0 ms, 76 % of 6.6 ms')
    expect(said(of2010(but({ tibial: { dml: 8.98 } })), 'a')).toContain('RIGHT tibial 9.0 ms, 149.7 % of 6 ms')
  })

  it('what was not recorded cannot be assessed, and the whole stays open', () => {
    const pattern = of2010({ median: { dml: 4, mcv: 52, amp: 8, proximalAmp: 7.8 }, ulnar: { dml: 3, mcv: 55, amp: 8, proximalAmp: 7.8 } })
    expect(truths(pattern)).toMatchObject({ a: 'not-met', b: 'not-met', c: 'not-assessable', d: 'not-assessable', e: 'not-met', f: 'not-assessable', g: 'not-assessable' })
    expect([criterionOf(pattern, 'c').because, criterionOf(pattern, 'f').because]).toEqual(['no F-waves recorded', 'durations not recorded'])
    expect(outcome(pattern)).toBe('not-assessable: not met in what could be assessed')
  })

  it('without limits: not assessable, with the reason once for all nerves', () => {
    const pattern = of2010(but({ ulnar: { dml: 9 }, tibial: { dml: 12 } }), { limits: [] })
    expect(said(pattern, 'a')).toBe('not-assessable:  [RIGHT median, RIGHT ulnar, RIGHT fibular, RIGHT tibial no limit: no set adopted here]')
    expect(pattern.outcome.met).toBe('not-assessable')
  })

  it('where amplitude or its limit is missing, both bars have to agree', () => {
    const without = cardLimits.filter(([technique, quantity]) => !(technique === 'tibial-motor-ah' && quantity === 'amplitudeMv'))
    const c = (f: number) => said(of2010(but({ ulnar: { f: 41.6 }, tibial: { f } }), { limits: without }), 'c')
    expect(c(75)).toMatch(/^not-met/)
    expect(c(80)).toMatch(/^not-assessable.*amplitude, which decides between 130 and 150 %/)
    expect(c(87)).toMatch(/^met/)
  })

  it('no response: the nerve has no part in latency and velocity', () => {
    const silent: NerveNumbers = { dml: 'no-response', amp: 'no-response' }
    const pattern = of2010([...runsOf({ ulnar: { ...normal.ulnar, dml: 5.6 } }), ...runsOf({ fibular: silent, tibial: silent })])
    expect(said(pattern, 'a')).toBe('not-assessable: RIGHT ulnar 5.6 ms, 156 % of 3.6 ms [1 nerve only could be looked at, 2 needed; RIGHT fibular, RIGHT tibial no response]')
  })

  it('both sides of a nerve count as two', () => {
    const pattern = of2010([...runsOf({ ulnar: { ...normal.ulnar, dml: 5.6 } }), ...runsOf({ ulnar: { ...normal.ulnar, dml: 5.5 } }, 'left')])
    expect(truths(pattern).a).toBe('met')
  })

  it('two recordings of one nerve count once', () => {
    const fdi = run('ulnar-motor-fdi', 'right', [['wrist', { latencyMs: 9, amplitudeMv: 8, distanceMm: 100 }]])
    const limits: Limit[] = [...cardLimits, ['ulnar-motor-fdi', 'latencyMs', 'wrist', 'upper', 4.5]]
    const pattern = of2010([...runsOf({ ulnar: { ...normal.ulnar, dml: 5.6 }, tibial: normal.tibial }), fdi], { limits })
    expect(said(pattern, 'a')).toMatch(/^not-met: RIGHT ulnar 5\.6 ms, 156 % of 3\.6 ms; 9\.0 ms, 200 % of 4\.5 ms; RIGHT tibial/)
  })

  it('a slow segment across the elbow never counts', () => {
    const elbow = run('ulnar-motor-adm', 'right', [['wrist', { latencyMs: 3, amplitudeMv: 8, distanceMm: 80 }], ['below-elbow', { latencyMs: 7, amplitudeMv: 8, distanceMm: 220 }], ['above-elbow', { latencyMs: 12, amplitudeMv: 2, distanceMm: 100 }]])
    const limits: Limit[] = [...cardLimits, ['ulnar-motor-adm', 'velocityMps', 'across-elbow', 'lower', 50]]
    const pattern = of2010([elbow, ...runsOf({ fibular: { ...normal.fibular, mcv: 28 } })], { limits })
    expect(truths(pattern)).toMatchObject({ b: 'not-met', e: 'not-met' })
  })

  it('from the wrist to Erb\'s point 50 % is asked for, to the axilla 30 %', () => {
    const far = (site: string) => run('median-motor-apb', 'right', [['wrist', { latencyMs: 4, amplitudeMv: 10 }], [site, { latencyMs: 12, amplitudeMv: 6 }]])
    const probable = (site: string) => truths(of2010([far(site), ...runsOf({ ulnar: { ...normal.ulnar, proximalAmp: 5 } })])).probable
    expect([probable('axilla'), probable('erb')]).toEqual(['met', 'not-met'])
  })

  it('the setting leaves out the median latency at the wrist', () => {
    const changes = but({ median: { dml: 7 }, ulnar: { dml: 5.4 } })
    const on = of2010(changes, { policy: { leaveOutEntrapmentSites: true } })
    expect(truths(on)).toMatchObject({ 'a': 'not-met', 'entrapment-sites': 'met' })
    expect(outcome(on)).toBe('met: possible: in one nerve')
    expect(said(of2010(changes), 'a')).toMatch(/RIGHT median 7\.0 ms, 156 % of 4\.5 ms: not counted if from carpal tunnel syndrome/)
  })

  it('is not shown for one motor nerve', () => {
    const patterns = patternsOf(runsOf({ ulnar: normal.ulnar }), { limits: cardLimits })
    expect([has(patterns, 'cidp-efns-pns-2010'), has(patterns, 'cidp-ean-pns-2021'), has(patterns, 'gbs-ho-1995')]).toEqual([false, false, false])
  })

  describe('sensory criteria beside it', () => {
    const limits: Limit[] = [
      ...cardLimits,
      ['median-sensory-d2', 'velocityMps', 'wrist', 'lower', 50], ['median-sensory-d2', 'amplitudeUv', 'wrist', 'lower', 10],
      ['ulnar-sensory-d5', 'velocityMps', 'wrist', 'lower', 50], ['ulnar-sensory-d5', 'amplitudeUv', 'wrist', 'lower', 10],
      ['radial-sensory-snuffbox', 'amplitudeUv', 'forearm', 'lower', 10], ['sural', 'amplitudeUv', 'calf', 'lower', 4],
    ]
    const beside = (runs: Run[], given: Given = {}) => of2010([...runsOf(normal), ...runs], { limits, ...given })
    const velocity = (mps: number) => 140 / mps
    it('velocity below 80 %, or below 70 % with a low amplitude, in two nerves', () => {
      const two = (median: number, ulnar: number, amplitude: number) => truths(beside([
        sensory('median-sensory-d2', 'right', { onset: velocity(median), amplitude: 12 }), sensory('ulnar-sensory-d5', 'right', { onset: velocity(ulnar), amplitude }),
      ]))['sensory-velocity']
      expect([two(39, 39, 12), two(40, 39, 12), two(39, 39, 8), two(39, 39, 7.9), two(39, 34.9, 7.9)]).toEqual(['met', 'not-met', 'met', 'not-met', 'met'])
    })
    it('one response alone is not two', () => expect(said(beside([sensory('ulnar-sensory-d5', 'right', { onset: 4, amplitude: 8 })]), 'sensory-velocity')).toBe('not-assessable:  [fewer than two sensory responses]'))
    it('sural sparing: a low radial response with a normal sural one', () => {
      const sparing = (arm: Run, sural: number, given: Given = {}) => truths(beside([arm, sensory('sural', 'right', { amplitude: sural })], given))['sural-sparing']
      const radial = (amplitude: number) => sensory('radial-sensory-snuffbox', 'right', { amplitude }, 100)
      const median = sensory('median-sensory-d2', 'right', { onset: 2.5, amplitude: 5 })
      expect([sparing(radial(9), 8), sparing(radial(9), 3), sparing(radial(11), 8)]).toEqual(['met', 'not-met', 'not-met'])
      expect([sparing(median, 8), sparing(median, 8, { policy: { leaveOutEntrapmentSites: true } })]).toEqual(['not-assessable', 'not-met'])
    })
    it('is left out where no sensory nerve was studied', () => expect(of2010(but({})).criteria.some(one => one.id.startsWith('sensory'))).toBe(false))
  })
})

describe('CIDP, EAN/PNS 2021', () => {
  const sensoryLimits: Limit[] = [['sural', 'amplitudeUv', 'calf', 'lower', 4], ['ulnar-sensory-d5', 'amplitudeUv', 'wrist', 'lower', 10], ['radial-sensory-snuffbox', 'amplitudeUv', 'forearm', 'lower', 10]]
  const rows: [name: string, changes: Study, ids: Record<string, string>, label: string][] = [
    ['normal', {}, { a: 'not-met', b: 'not-met', c: 'not-met', d: 'not-met', e: 'not-met', f: 'not-met', g: 'not-met', weak: 'not-met' }, 'not-met: not met'],
    ['F exactly 120 % in two', { ulnar: { f: 38.4 }, tibial: { f: 69.6 } }, { c: 'met' }, 'met: strongly supportive (c); sensory not assessable'],
    ['F under 120 %', { ulnar: { f: 38.4 }, tibial: { f: 69.5 } }, { c: 'not-met', weak: 'met' }, 'met: weakly supportive: in one nerve; sensory not assessable'],
    ['fall of 30 % in two', { ulnar: { proximalAmp: 5.6 }, median: { proximalAmp: 5.6 } }, { e: 'met' }, 'met: strongly supportive (e); sensory not assessable'],
    ['the tibial nerve does not count for falls', { ulnar: { proximalAmp: 5.6 }, tibial: { proximalAmp: 2 } }, { e: 'not-met' }, 'met: weakly supportive: in one nerve; sensory not assessable'],
    ['the tibial duration has to double', { ulnar: { proximalDuration: 7.2 }, tibial: { proximalDuration: 10.99 } }, { f: 'not-met' }, 'met: weakly supportive: in one nerve; sensory not assessable'],
    ['doubled exactly', { ulnar: { proximalDuration: 7.2 }, tibial: { proximalDuration: 11 } }, { f: 'met' }, 'met: strongly supportive (f); sensory not assessable'],
    ['latency in two', { ulnar: { dml: 5.4 }, tibial: { dml: 9 } }, { a: 'met' }, 'met: strongly supportive (a); sensory not assessable'],
    ['velocity in two', { ulnar: { mcv: 35 }, fibular: { mcv: 28.7 } }, { b: 'met' }, 'met: strongly supportive (b); sensory not assessable'],
    ['no F in two, another parameter in a third', { ulnar: { f: 'no-response' }, tibial: { f: 'no-response' }, fibular: { mcv: 28 } }, { d: 'met' }, 'met: strongly supportive (d); sensory not assessable'],
  ]
  for (const [name, changes, wanted, label] of rows) {
    it(`${name}: ${label}`, () => {
      const pattern = of2021(but(changes))
      expect(truths(pattern)).toMatchObject(wanted)
      expect(outcome(pattern)).toBe(label)
    })
  }

  it.each([
    [2, { median: 8.4, ulnar: 9.6, fibular: 8.8, tibial: 9.2 }], [5, { median: 8.0, ulnar: 8.6, fibular: 8.5, tibial: 8.3 }],
    [10, { median: 7.8, ulnar: 8.5, fibular: 8.3, tibial: 8.2 }], [20, { median: 7.4, ulnar: 7.8, fibular: 8.1, tibial: 8.0 }],
  ] as const)('duration limits at %d Hz: exactly on them is within', (filterHz, limits) => {
    for (const [nerve, limit] of Object.entries(limits) as [Motor, number][]) {
      const other: Motor = nerve === 'fibular' ? 'ulnar' : 'fibular'
      const at = (duration: number) => truths(of2021(but({ [nerve]: { duration, proximalDuration: duration, filterHz }, [other]: { mcv: 25 } }))).g
      expect([at(limit), at(limit + 0.01)], nerve).toEqual(['not-met', 'met'])
    }
  })
  it('a filter without limits', () => {
    expect(criterionOf(of2021(but({ median: { filterHz: 3 }, ulnar: { filterHz: 3, mcv: 30 }, fibular: { filterHz: 3 }, tibial: { filterHz: 3 } })), 'g').because).toBe('RIGHT median, RIGHT ulnar, RIGHT fibular, RIGHT tibial no published limit for a filter of 3 Hz')
  })

  it('the sensory criterion stands in the label', () => {
    const label = (...amplitudes: [sural: number, ulnar: number]) => of2021([...runsOf(but({ ulnar: { mcv: 35 }, fibular: { mcv: 28.7 } })), sensory('sural', 'right', { amplitude: amplitudes[0] }), sensory('ulnar-sensory-d5', 'right', { amplitude: amplitudes[1] })], { limits: [...cardLimits, ...sensoryLimits] }).outcome.label
    expect(label(3, 9)).toBe('strongly supportive (b); sensory abnormal in two nerves')
    expect(label(3, 10)).toBe('strongly supportive (b); sensory criterion not met')
  })

  it('is off until it is turned on', () => {
    const off = patternsOf(runsOf(but({})), { limits: cardLimits, policy: { patternsOn: [] } })
    expect([has(off, 'cidp-efns-pns-2010'), has(off, 'cidp-ean-pns-2021')]).toEqual([true, false])
  })
})
