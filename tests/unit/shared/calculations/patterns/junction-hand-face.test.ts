import { describe, expect, it } from 'vitest'
import type { Entry, Run, RunRow } from '#shared/schemas/study'
import { run } from '../study-maker'
import { criterionOf, has, motorNerve, outcome, patternOf, patternsOf, pick, said, truths, type Given, type Limit } from './pattern-maker'

type TrainRow = [site: string, values: RunRow['values'], series?: Entry[]]
const trains = (rows: TrainRow[], technique = 'repetitive-ulnar-adm') => run(technique, 'right', rows)
const decrement = (rows: TrainRow[], technique?: string, given: Given = {}) => patternOf('myasthenic-decrement', [trains(rows, technique)], given, 'right')
const rest = [8.0, 6.9, 6.4, 6.2, 6.3]
const repaired = [8.2, 7.9, 7.7, 7.6, 7.6]
const exhausted = [8.0, 6.6, 5.9, 5.6, 5.7]
const steady = [8.0, 7.9, 7.9, 7.9, 7.9]

describe('decrement', () => {
  it('in more than one train, with repair and exhaustion', () => {
    const pattern = decrement([['rest', { rateHz: 3 }, rest], ['after-exercise', { rateHz: 3, secondsAfterExercise: 0 }, repaired], ['after-exercise', { rateHz: 3, secondsAfterExercise: 180 }, exhausted]])
    expect(outcome(pattern)).toBe('met: largest decrement 30.0 %, in more than one train')
    expect(pattern.criteria.map(one => `${one.id.replace(/^.*?\//, '')} ${one.result} ${one.numbers}`)).toEqual([
      'right-repetitive-ulnar-adm-0/decrement met 22.5 %', 'right-repetitive-ulnar-adm-1/decrement not-met 7.3 %', 'right-repetitive-ulnar-adm-2/decrement met 30.0 %',
      'repeated met 2 of 3 trains', 'shape met at rest, after exercise, 180 s',
      'repair met at rest 22.5 %, after exercise, 0 s 7.3 %', 'exhaustion met at rest 22.5 %, after exercise, 180 s 30.0 %',
    ])
    expect(criterionOf(pattern, 'repetitive-ulnar-adm/right-repetitive-ulnar-adm-1/decrement').because).toBe('equivocal, 5 to 10 %')
  })
  it('one train alone is not reproducible', () => {
    const pattern = decrement([['rest', { rateHz: 3 }, rest]])
    expect(outcome(pattern)).toBe('not-assessable: largest decrement 22.5 %, not repeated')
    expect(said(pattern, 'repetitive-ulnar-adm/repeated')).toBe('not-assessable: 1 of 1 trains [one train only]')
  })
  it('one of two is not met, none is not met', () => {
    expect(outcome(decrement([['rest', { rateHz: 3 }, rest], ['after-exercise', { rateHz: 3, secondsAfterExercise: 60 }, steady]]))).toBe('not-met: largest decrement 22.5 %, not repeated')
    expect(outcome(decrement([['rest', { rateHz: 3 }, steady], ['after-exercise', { rateHz: 3 }, steady]]))).toBe('not-met: largest decrement 1.3 %')
  })
  it('exactly 10 % is not above it, exactly 5 % is equivocal', () => {
    const at = (fourth: number) => decrement([['rest', { rateHz: 3 }, [10, 9.6, fourth + 0.1, fourth, fourth]]])
    expect(outcome(at(9))).toBe('not-met: largest decrement 10.0 %, equivocal')
    expect(outcome(at(9.5))).toBe('not-met: largest decrement 5.0 %, equivocal')
    expect(outcome(at(9.51))).toBe('not-met: largest decrement 4.9 %')
    expect(outcome(at(8.99))).toBe('not-assessable: largest decrement 10.1 %, not repeated')
  })
  it('a train that keeps falling is rather an artefact', () => {
    const falling = [8.0, 7.7, 7.4, 7.1, 6.8, 6.5, 6.2, 5.9, 5.6, 5.3]
    const pattern = decrement([['rest', { rateHz: 3 }, falling], ['after-exercise', { rateHz: 3 }, falling]])
    expect(pattern.criteria[0]).toMatchObject({ result: 'not-assessable', numbers: '11.3 %', because: 'keeps falling to the last response: rather an artefact' })
    expect(outcome(pattern)).toBe('not-assessable: no train that could be assessed')
  })
  it('another rate than 2 to 5 Hz is not taken', () => {
    const at = (rateHz: number) => decrement([['rest', { rateHz }, rest]]).criteria[0]?.because
    expect([at(1), at(2), at(5), at(6)]).toEqual(['stimuli at 1 Hz, not 2 to 5 Hz', undefined, undefined, 'stimuli at 6 Hz, not 2 to 5 Hz'])
  })
  it('shape: the first step is the largest', () => {
    const late = [8, 7.9, 7.2, 6.4, 6.4]
    expect(said(decrement([['rest', { rateHz: 3 }, late]]), 'repetitive-ulnar-adm/shape')).toBe('not-met: at rest')
    expect(said(decrement([['rest', { rateHz: 3 }, steady]]), 'repetitive-ulnar-adm/shape')).toBe('not-assessable:  [no train with a decrement above 10 %]')
  })
  it('repair and exhaustion the other way round', () => {
    const pattern = decrement([['rest', { rateHz: 3 }, rest], ['after-exercise', { rateHz: 3, secondsAfterExercise: 30 }, exhausted], ['after-exercise', { rateHz: 3, secondsAfterExercise: 60 }, repaired]])
    expect(truths(pattern)).toMatchObject({ 'repetitive-ulnar-adm/repair': 'not-met', 'repetitive-ulnar-adm/exhaustion': 'not-met' })
    expect(said(decrement([['rest', { rateHz: 3 }, rest]]), 'repetitive-ulnar-adm/repair')).toBe('not-assessable:  [no train at that time]')
    expect(said(decrement([['after-exercise', { rateHz: 3, secondsAfterExercise: 0 }, repaired]]), 'repetitive-ulnar-adm/repair')).toBe('not-assessable:  [no train at rest]')
  })
  it('a missing fourth response, and cold', () => {
    expect(decrement([['rest', { rateHz: 3 }, [8, 7, 'technical', 'technical', 6]]]).criteria[0]?.because).toBe('first or fourth response missing')
    expect(decrement([['rest', { rateHz: 3 }, rest]], undefined, { study: { temperatures: [] } }).criteria[0]?.because).toBe('cold: no temperature of the RIGHT hand')
    expect(decrement([['rest', { rateHz: 3 }, rest]], 'repetitive-facial-nasalis', { study: { temperatures: [] } }).criteria[0]?.result).toBe('met')
  })
  it('fast trains are left to the increment', () => {
    expect(has(patternsOf([trains([['high-rate', { rateHz: 30 }, [1, 2, 3, 4]]])]), 'myasthenic-decrement', 'right')).toBe(false)
    expect(has(patternsOf([trains([['rest', { rateHz: 10 }, [1, 2, 3, 4]]])]), 'myasthenic-decrement', 'right')).toBe(false)
  })
})

describe('increment', () => {
  const increment = (rows: TrainRow[], more: Run[] = [], given: Given = {}) => patternOf('lambert-eaton-increment', [trains(rows), ...more], given, 'right')
  const after = (before: number, then: number) => increment([['rest', { amplitudeMv: before }], ['after-exercise', { amplitudeMv: then, secondsAfterExercise: 0 }]])
  it('59, 60 and 100 %', () => {
    expect(outcome(after(1, 1.59))).toBe('not-met: increment 59 %')
    expect(outcome(after(1, 1.6))).toBe('met: increment 60 %, 60 % or more')
    expect(outcome(after(1, 2))).toBe('met: increment 100 %, 100 % or more')
    expect(said(after(1, 1.6), 'repetitive-ulnar-adm/increment-60')).toBe('met: 60 %, from 1 mV to 1.6 mV')
    expect(said(after(1, 1.996), 'repetitive-ulnar-adm/increment-100')).toBe('not-met: 99.6 %, from 1 mV to 1.996 mV')
  })
  it('the largest after exercise counts', () => {
    const pattern = increment([['rest', { amplitudeMv: 1 }], ['after-exercise', { amplitudeMv: 1.8, secondsAfterExercise: 0 }], ['after-exercise', { amplitudeMv: 1.1, secondsAfterExercise: 60 }]])
    expect(outcome(pattern)).toBe('met: increment 80 %, 60 % or more')
  })
  it('no amplitude before: not computable', () => {
    const pattern = after(0, 0.4)
    expect(outcome(pattern)).toBe('not-assessable: no increment after exercise that could be computed')
    expect(criterionOf(pattern, 'repetitive-ulnar-adm/increment-60').because).toBe('the response before is not above 0')
  })
  it('a fast train stands beside it', () => {
    const fast = (last: number) => increment([['high-rate', { rateHz: 30 }, [1, 1.4, last]]])
    expect([truths(fast(2))['repetitive-ulnar-adm/increment-fast'], truths(fast(2.01))['repetitive-ulnar-adm/increment-fast']]).toEqual(['not-met', 'met'])
    expect(outcome(fast(2.5))).toBe('not-assessable: no increment after exercise that could be computed')
  })
  it('the amplitude at rest from the motor study of the same muscle', () => {
    const limits: Limit[] = [['ulnar-motor-adm', 'amplitudeMv', 'wrist', 'lower', 6]]
    const rows: TrainRow[] = [['rest', { amplitudeMv: 1 }], ['after-exercise', { amplitudeMv: 2 }]]
    const low = (amp: Entry) => said(increment(rows, motorNerve('ulnar', 'right', { dml: 3, amp }), { limits }), 'repetitive-ulnar-adm/low-amplitude')
    expect([low(1), low(6), low('no-response')]).toEqual(['met: 1.0 mV, limit 6.0 mV', 'not-met: 6.0 mV, limit 6.0 mV', 'met: no response'])
    expect(said(increment(rows), 'repetitive-ulnar-adm/low-amplitude')).toBe('not-assessable:  [no motor study of the same muscle]')
  })
  it('cold, and only one train at rest', () => {
    expect(increment([['rest', { amplitudeMv: 1 }], ['after-exercise', { amplitudeMv: 3 }]], [], { study: { temperatures: [] } }).outcome.met).toBe('not-assessable')
    expect(has(patternsOf([trains([['rest', { amplitudeMv: 1 }]])]), 'lambert-eaton-increment', 'right')).toBe(false)
  })
})

describe('split hand', () => {
  const hand = (apb: Entry, fdi: Entry, adm: Entry) => [...motorNerve('median', 'right', { amp: apb }), run('ulnar-motor-fdi', 'right', [['wrist', { amplitudeMv: fdi }]]), ...motorNerve('ulnar', 'right', { amp: adm })]
  const split = (runs: Run[], given: Given = {}) => patternOf('split-hand-index', runs, given, 'right')
  it('between the cut-offs it stays open', () => {
    expect(outcome(split(hand(5, 10, 10)))).toBe('met: below every cut-off that was read')
    expect(outcome(split(hand(6, 10, 10)))).toBe('not-assessable: between the published cut-offs')
    expect(outcome(split(hand(7.2, 10, 10)))).toBe('not-met: above the cut-offs')
    expect(outcome(split(hand(5.04, 10, 10)))).toBe('not-assessable: between the published cut-offs')
    expect(truths(split(hand(5.1, 10, 10)))).toEqual({ 'below-7-2': 'met', 'below-5-2': 'met', 'below-5-04': 'not-met' })
    expect(said(split(hand(5.2, 10, 10)), 'below-5-2')).toBe('not-met: 5.2 mV')
  })
  it('no response over the thenar is an index of 0', () => expect(outcome(split(hand('no-response', 8, 8)))).toBe('met: below every cut-off that was read'))
  it('not computable, cold, not all three recorded', () => {
    expect(outcome(split(hand('technical', 8, 8)))).toBe('not-assessable: not computable')
    expect(outcome(split(hand(5, 10, 10), { study: { temperatures: [] } }))).toBe('not-assessable: not computable')
    expect(has(patternsOf(hand(5, 10, 10).slice(0, 2)), 'split-hand-index', 'right')).toBe(false)
  })
  it('is called supporting only', () => expect(split(hand(5, 10, 10)).title).toMatch(/supporting only/))
})

describe('blink reflex', () => {
  const limits: Limit[] = [['blink', 'r1Ms', null, 'upper', 13], ['blink', 'r2IpsilateralMs', null, 'upper', 41], ['blink', 'r2ContralateralMs', null, 'upper', 44]]
  type Three = [r1: Entry, same: Entry, other: Entry]
  const fine: Three = [10, 32, 33]
  const blink = (right: Three, left: Three, given: Given = {}) => {
    const runs = ([['right', right], ['left', left]] as const).map(([side, [r1Ms, r2IpsilateralMs, r2ContralateralMs]]) => run('blink', side, [['supraorbital', { r1Ms, r2IpsilateralMs, r2ContralateralMs }]]))
    const patterns = patternsOf(runs, { limits, ...given })
    return [outcome(pick(patterns, 'blink-pattern', 'right')), outcome(pick(patterns, 'blink-pattern', 'left'))]
  }
  const rows: [name: string, right: Three, left: Three, wanted: [string, string]][] = [
    ['normal', fine, fine, ['not-met: neither pattern', 'not-met: neither pattern']],
    ['right trigeminal', ['no-response', 45, 46], fine, ['met: trigeminal pattern', 'not-met: neither pattern']],
    ['left facial', [10, 32, 'no-response'], [15, 'no-response', 33], ['not-met: neither pattern', 'met: facial pattern']],
    ['right facial', [15, 42, 33], [10, 32, 45], ['met: facial pattern', 'not-met: neither pattern']],
    ['all late', [15, 45, 46], [15, 45, 46], ['not-met: neither pattern', 'not-met: neither pattern']],
    ['exactly on the limits', [13, 41, 44], fine, ['not-met: neither pattern', 'not-met: neither pattern']],
    ['only R1 late', [14, 32, 33], fine, ['not-met: neither pattern', 'not-met: neither pattern']],
    ['one response stopped', ['no-response', 45, 'stopped'], fine, ['not-assessable: not assessable', 'not-met: neither pattern']],
  ]
  for (const [name, right, left, wanted] of rows) it(name, () => expect(blink(right, left)).toEqual(wanted))
  it('without limits it stays open', () => expect(blink([15, 45, 46], fine, { limits: [] })).toEqual(['not-assessable: not assessable', 'not-assessable: not assessable']))
  it('says the numbers', () => {
    const runs = [run('blink', 'right', [['supraorbital', { r1Ms: 'no-response', r2IpsilateralMs: 45, r2ContralateralMs: 46 }]]), run('blink', 'left', [['supraorbital', { r1Ms: 10, r2IpsilateralMs: 32, r2ContralateralMs: 33 }]])]
    const pattern = pick(patternsOf(runs, { limits }), 'blink-pattern', 'right')
    expect(said(pattern, 'trigeminal')).toBe('met: R1 no response; R2 45.0 ms, limit 41.0 ms; R2 other side 46.0 ms, limit 44.0 ms')
    expect(said(pattern, 'facial')).toBe('not-met: R1 no response; R2 45.0 ms, limit 41.0 ms; R2 after LEFT stimulation 33.0 ms, limit 44.0 ms')
  })
  it('needs both sides', () => expect(has(patternsOf([run('blink', 'right', [['supraorbital', { r1Ms: 10 }]])], { limits }), 'blink-pattern', 'right')).toBe(false))
})
