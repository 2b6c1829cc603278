import { describe, expect, it } from 'vitest'
import { allOf, anyOf, atLeast, either, every, joined, named, negated, notTruth, passes, plainNumber, printBeside, quiet, type Bar, type Finding, type Truth } from '#shared/calculations/patterns/finding'

const [yes, no, open] = ['met', 'not-met', 'not-assessable'] as const

describe('truths', () => {
  const rows: [truths: Truth[], any: Truth, all: Truth][] = [
    [[yes, no, open], yes, no], [[yes, open], yes, open], [[no, open], open, no], [[yes, yes], yes, yes], [[no, no], no, no], [[yes, no], yes, no], [[open], open, open], [[], open, open],
  ]
  it.each(rows)('%j: any %s, all %s', (truths, any, all) => expect([anyOf(truths), allOf(truths)]).toEqual([any, all]))
  it('at least two', () => {
    const two = (...truths: Truth[]) => atLeast(2, truths)
    expect([two(yes, yes, no), two(yes, open), two(open, open, no), two(yes, no, no), two(open, no)]).toEqual([yes, open, open, no, no])
  })
  it('the opposite of what is open is open', () => expect([yes, no, open].map(notTruth)).toEqual([no, yes, open]))
})

describe('findings', () => {
  const met: Finding = { result: yes, numbers: '5 ms' }
  const notMet: Finding = { result: no, numbers: '3 ms', because: 'said elsewhere' }
  const unknown: Finding = { result: open, numbers: '4 ms', because: 'no limit' }
  it('all of them, with the reasons of those that keep it open', () => {
    expect(every(met, unknown)).toEqual({ result: open, numbers: '5 ms; 4 ms', because: 'no limit' })
    expect(every(met, notMet, unknown)).toEqual({ result: no, numbers: '5 ms; 3 ms; 4 ms' })
    expect(every(met, met)).toEqual({ result: yes, numbers: '5 ms' })
  })
  it('any of them', () => {
    expect(either(notMet, unknown)).toEqual({ result: open, numbers: '3 ms; 4 ms', because: 'no limit' })
    expect(either(notMet, met)).toEqual({ result: yes, numbers: '3 ms; 5 ms' })
  })
  it('turned, named, silenced', () => {
    expect(negated(notMet)).toEqual({ result: yes, numbers: '3 ms', because: 'said elsewhere' })
    expect([named('latency', met).numbers, named('latency', quiet(met)).numbers]).toEqual(['latency 5 ms', ''])
    expect(quiet(unknown)).toEqual({ result: open, numbers: '', because: 'no limit' })
  })
  it('parts are joined once each', () => expect(joined(['a', '', undefined, 'b', 'a'])).toBe('a; b'))
})

describe('bars', () => {
  const rows: [value: number, op: Bar['op'], bar: number, wanted: boolean][] = [
    [6.5, 'above', 6.5, false], [6.51, 'above', 6.5, true], [0.2 + 0.4 + 0.3, 'above', 0.9, false], [3.2 - 2.8, 'above', 0.4, false],
    [5.4, 'at-least', 5.4, true], [3.6 * 1.5, 'at-least', 5.4, true], [5.39, 'at-least', 5.4, false], [0.1 + 0.2, 'at-least', 0.3, true], [0.3, 'at-least', 0.1 + 0.2, true],
    [0.2, 'below', 0.2, false], [0.19, 'below', 0.2, true], [0.3, 'below', 0.1 + 0.2, false],
    [35, 'at-most', 35, true], [35.1, 'at-most', 35, false], [0.1 + 0.2, 'at-most', 0.3, true],
  ]
  it.each(rows)('%d %s %d: %s', (value, op, bar, wanted) => expect(passes(value, { op, value: bar })).toBe(wanted))
  it('prints on the side of the bar on which the value stands', () => {
    expect(printBeside(6.53, 1, { op: 'above', value: 6.5 })).toBe('6.53')
    expect(printBeside(6.6, 1, { op: 'above', value: 6.5 })).toBe('6.6')
    expect(printBeside(149.6, 0, { op: 'at-least', value: 150 })).toBe('149.6')
    expect(printBeside(150, 0, { op: 'at-least', value: 150 })).toBe('150')
    expect(printBeside(5.9996, 1, { op: 'below', value: 6 })).toBe('5.9996')
  })
  it('bars without needless zeros', () => expect([50, 0.36, 42.424, 6.5, 100].map(plainNumber)).toEqual(['50', '0.36', '42.42', '6.5', '100']))
})
