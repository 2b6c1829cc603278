import { describe, expect, it } from 'vitest'
import type { Entry, Run } from '#shared/schemas/study'
import { cardLimits, criterionOf, has, motorNerve, outcome, patternOf, patternsOf, said, sensory, truths, type Given, type Limit } from './pattern-maker'

/** Limits at the 1st and 99th percentile, as the definition asks for. */
const percentile = { percentile: 1 }
const limits: Limit[] = [
  ...cardLimits.map(([technique, quantity, at, bound, value]): Limit => [technique, quantity, at, bound, value, { percentile: bound === 'lower' ? 1 : 99 }]),
  ['sural', 'amplitudeUv', 'calf', 'lower', 4, percentile], ['sural', 'velocityMps', 'calf', 'lower', 40, percentile],
  ['ulnar-sensory-d5', 'amplitudeUv', 'wrist', 'lower', 10, percentile], ['median-sensory-d2', 'amplitudeUv', 'wrist', 'lower', 11, percentile],
]
const sural = (amplitude: Entry, side: 'right' | 'left' = 'right') => sensory('sural', side, amplitude === 'no-response' ? { onset: amplitude, amplitude } : { onset: 3, amplitude })
const fibular = (amp: Entry) => motorNerve('fibular', 'right', { dml: 5, amp, mcv: 45 })
const england = (runs: Run[], given: Given = {}) => patternOf('length-dependent-2005', runs, { limits, ...given })

describe('length-dependent polyneuropathy', () => {
  it('sural and another nerve', () => {
    const pattern = england([sural('no-response'), ...fibular(1.9)])
    expect(outcome(pattern)).toBe('met: sural and another nerve abnormal')
    expect(said(pattern, 'sural')).toBe('met: RIGHT sural sensory no response')
    expect(said(pattern, 'another')).toMatch(/^met: RIGHT fibular motor amplitude 1\.9 mV, limit 2\.0 mV/)
  })
  it('exactly on the limits is not abnormal', () => expect(outcome(england([sural(4), ...fibular(2)]))).toBe('not-met: no nerve abnormal'))
  it('without the sural nerve, or with it alone', () => {
    expect(outcome(england([sural(9), ...fibular(1), ...motorNerve('tibial', 'right', { dml: 5, amp: 1, mcv: 44 })]))).toBe('not-met: sural not abnormal')
    expect(outcome(england([sural(2), ...fibular(4)]))).toBe('not-met: sural abnormal, no other nerve')
  })
  it('the sural nerve of the other side is not another nerve', () => expect(outcome(england([sural(2), sural(2, 'left'), ...fibular(4)]))).toBe('not-met: sural abnormal, no other nerve'))
  it('one side is enough', () => expect(outcome(england([sural(9), sural(2, 'left'), ...fibular(1)]))).toBe('met: sural and another nerve abnormal'))
  it('a slow sural response is an attribute too', () => expect(said(england([sensory('sural', 'right', { onset: 3.6, amplitude: 9 }), ...fibular(1)]), 'sural')).toBe('met: RIGHT sural sensory velocity 38.9 m/s, limit 40 m/s'))
  it('no motor response counts as abnormal', () => expect(outcome(england([sural(2), ...motorNerve('fibular', 'right', { dml: 'no-response', amp: 'no-response' })]))).toMatch(/^met/))
  it('no other nerve studied', () => expect(said(england([sural(2)]), 'another')).toBe('not-assessable:  [no other nerve studied]'))
  it('without limits, or cold, it stays open', () => {
    expect(outcome(england([sural(2), ...fibular(1)], { limits: [] }))).toBe('not-assessable: not met in what could be assessed')
    const cold = england([sural(2), ...fibular(1)], { study: { temperatures: [] } })
    expect(outcome(cold)).toBe('not-assessable: not met in what could be assessed')
    expect(said(cold, 'another')).toBe('not-assessable:  [RIGHT fibular motor: cold: no temperature of the RIGHT foot]')
  })
  it('says when the limits are less strict than the definition asks', () => {
    const third: Limit[] = [...cardLimits, ['sural', 'amplitudeUv', 'calf', 'lower', 4]]
    const pattern = england([sural(2), ...fibular(1)], { limits: third })
    expect(outcome(pattern)).toBe('met: sural and another nerve abnormal; by limits less strict than the 1st percentile')
    expect(said(pattern, 'percentile')).toBe('not-met: lower limits at percentile 3')
    const unstated: Limit[] = [...cardLimits.map(([a, b, c, d, e]): Limit => [a, b, c, d, e, { percentile: null }]), ['sural', 'amplitudeUv', 'calf', 'lower', 4, { percentile: null }]]
    expect(outcome(england([sural(2), ...fibular(1)], { limits: unstated }))).toBe('met: sural and another nerve abnormal; percentile of the limits not stated')
    expect(said(england([sural(2), ...fibular(1)]), 'percentile')).toBe('met: lower limits at percentile 1')
  })
  it('the simplified protocol', () => {
    const arm = [sensory('ulnar-sensory-d5', 'right', { amplitude: 12 }), sensory('median-sensory-d2', 'right', { amplitude: 12 }), ...motorNerve('ulnar', 'right', { dml: 3, amp: 8 })]
    expect(said(england([sural(9), ...fibular(4)]), 'protocol')).toBe('met: sural sensory, fibular motor')
    expect(said(england([sural(9)]), 'protocol')).toBe('not-met: not recorded: fibular motor')
    expect(said(england([sural(2), ...fibular(4)]), 'protocol')).toBe('not-met: not recorded: ulnar sensory, median sensory, ulnar motor')
    expect(said(england([sural(2), ...fibular(4), ...arm]), 'protocol')).toMatch(/^met/)
  })
  it('axonal pattern: 75 and 125 %, open up to 70 and 130 %', () => {
    const axonal = (dml: number, mcv: number) => truths(england([sural(2), ...motorNerve('tibial', 'right', { dml, amp: 1, mcv })])).axonal
    expect([axonal(7.5, 30.75), axonal(7.6, 44), axonal(7.8, 44), axonal(7.9, 44), axonal(5, 30.7), axonal(5, 28.8), axonal(5, 28.6)])
      .toEqual(['met', 'not-assessable', 'not-assessable', 'not-met', 'not-assessable', 'not-assessable', 'not-met'])
    expect(said(england([sural(2)]), 'axonal')).toBe('not-assessable:  [no motor velocity or latency with a limit]')
  })
  it('the setting leaves out the median nerve at the wrist', () => {
    const runs = [sural(2), ...fibular(4), sensory('median-sensory-d2', 'right', { amplitude: 5 }), ...motorNerve('median', 'right', { dml: 6, amp: 8 })]
    const on: Given = { policy: { leaveOutEntrapmentSites: true } }
    expect([outcome(england(runs)), outcome(england(runs, on))]).toEqual(['met: sural and another nerve abnormal', 'not-met: sural abnormal, no other nerve'])
    expect(truths(england(runs, on))).toMatchObject({ 'entrapment-sites': 'met', 'axonal': 'met' })
    expect(truths(england(runs)).axonal).toBe('not-met')
  })
  it('is not shown without the sural nerve', () => expect(has(patternsOf(fibular(1), { limits }), 'length-dependent-2005')).toBe(false))
})

describe('sural to radial ratio', () => {
  const pair = (suralUv: Entry, radialUv: Entry, more: Partial<Run> = {}) => [sural(suralUv), sensory('radial-sensory-snuffbox', 'right', { amplitude: radialUv }, 100, more)]
  const ratio = (runs: Run[], given: Given = {}) => patternOf('sural-radial-1997', runs, given, 'right')
  it('below 0.40, exactly 0.40 is not', () => {
    expect(outcome(ratio(pair(3.9, 10)))).toBe('met: ratio 0.39, below 0.40')
    expect(outcome(ratio(pair(4, 10)))).toBe('not-met: ratio 0.40')
    expect(outcome(ratio(pair(5.98, 15)))).toBe('met: ratio 0.399, below 0.40')
    expect(said(ratio(pair(7.1, 10)), 'below-0-40')).toBe('not-met: 0.71')
  })
  it('no sural response is a ratio of 0; without a radial one there is none', () => {
    expect(outcome(ratio(pair('no-response', 10)))).toBe('met: ratio 0.00, below 0.40')
    expect(ratio(pair(5, 'no-response')).outcome.met).toBe('not-assessable')
  })
  it('0.21 stands beside it', () => expect([truths(ratio(pair(2, 10)))['below-0-21'], truths(ratio(pair(2.1, 10)))['below-0-21']]).toEqual(['met', 'not-met']))
  it('so does the limit for the age', () => {
    const at = (birthDate: string) => said(ratio(pair(2.2, 10), { study: { patient: { birthDate, sexForLimits: 'female' } } }), 'below-age')
    expect([at('1996-06-01'), at('1995-06-01'), at('1985-06-01'), at('1975-06-01'), at('1965-06-01'), at('1955-06-01'), at('2010-06-01')]).toEqual([
      'met: 0.22, limit 0.3 from 18 years', 'met: 0.22, limit 0.23 from 31 years', 'not-met: 0.22, limit 0.2 from 41 years', 'not-met: 0.22, limit 0.17 from 51 years',
      'not-met: 0.22, limit 0.17 from 61 years', 'not-met: 0.22, limit 0.08 from 71 years', 'not-assessable:  [no limit under 18 years]',
    ])
    expect(criterionOf(ratio(pair(2.2, 10)), 'below-age').basis).toBe('derived')
  })
  it('is taken only from antidromic studies measured in one way', () => {
    expect(outcome(ratio(pair(3, 10, { amplitudeDefinition: 'peak-to-peak' })))).toBe('not-assessable: not assessable: the amplitudes are measured in two ways')
    expect(outcome(ratio(pair(3, 10, { direction: 'orthodromic' })))).toBe('not-assessable: not assessable: not both recorded antidromically')
  })
  it('cold, and not both recorded', () => {
    expect(outcome(ratio(pair(3, 10), { study: { temperatures: [] } }))).toMatch(/^not-assessable: not assessable: cold/)
    expect(has(patternsOf([sural(3)]), 'sural-radial-1997', 'right')).toBe(false)
  })
})
