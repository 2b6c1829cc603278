import { describe, expect, it } from 'vitest'
import { assessStudy } from '#shared/calculations/assess-study'
import { defaultPolicy, type Assessment, type Result } from '#shared/calculations/types'
import { referenceTables } from '#reference-tables'
import { carpalTunnelStudy, ndtfPolicy } from '../../../fixtures/carpal-tunnel-study'

const assessed = assessStudy(carpalTunnelStudy(), referenceTables, ndtfPolicy)
const slipped = assessStudy(carpalTunnelStudy(4.2), referenceTables, ndtfPolicy)
const results = (assessment: Assessment): Result[] => [...assessment.runs, ...assessment.comparisons].flatMap(one => one.results)
const find = (assessment: Assessment, key: string) => results(assessment).find(result => result.key === key) as Result

describe('the study of both hands, on the set aanem-ndtf-2016', () => {
  it('comes to the eight velocities', () => {
    expect(results(assessed).filter(result => result.quantity === 'velocityMps').map(result => result.print)).toEqual(['54', '37', '52', '59', '59', '54', '47', '50'])
  })
  it('has six flags and no seventh', () => {
    expect(assessed.flagged).toEqual([
      'right-median-motor/rmm-wrist/latencyMs',
      'right-median-sensory/right-median-sensory-wrist/onsetLatencyMs',
      'right-median-sensory/right-median-sensory-wrist/peakLatencyMs',
      'compare/right/median-ulnar-sensory/onsetDifferenceMs',
      'compare/right/median-ulnar-sensory/peakDifferenceMs',
      'compare/right/median-ulnar-motor/motorLatencyDifferenceMs',
    ])
  })
  it.each([
    ['right-median-motor/rmm-wrist/latencyMs', 'outside', 4.4, 'woman, 50 to 79'],
    ['right-median-motor/rmm-wrist/amplitudeMv', 'within', 4.2, '40 to 59'],
    ['right-median-motor/rmm-elbow/velocityMps', 'within', 51, 'woman, 40 to 79'],
    ['right-median-sensory/right-median-sensory-wrist/onsetLatencyMs', 'outside', 3.3, ''],
    ['right-median-sensory/right-median-sensory-wrist/peakLatencyMs', 'outside', 4.0, ''],
    ['right-median-sensory/right-median-sensory-wrist/amplitudeUv', 'within', 7, '50 to 79, BMI 24 and over'],
    ['compare/right/median-ulnar-sensory/onsetDifferenceMs', 'outside', 0.5, ''],
    ['compare/right/median-ulnar-sensory/peakDifferenceMs', 'outside', 0.4, ''],
    ['compare/right/median-ulnar-motor/motorLatencyDifferenceMs', 'outside', 1.7, '50 to 79'],
    ['compare/left/median-ulnar-sensory/onsetDifferenceMs', 'within', 0.5, ''],
    ['compare/left/median-ulnar-sensory/peakDifferenceMs', 'within', 0.4, ''],
  ])('%s is %s its limit %f', (key, kind, limit, subgroup) => {
    const { verdict } = find(assessed, key)
    expect(verdict.kind).toBe(kind)
    expect('limits' in verdict && verdict.limits[0]).toMatchObject({ value: limit, subgroup, setId: 'aanem-ndtf-2016', setVersion: 1 })
  })
  it.each([
    ['compare/right/median-ulnar-sensory/onsetDifferenceMs', '1.1'], ['compare/right/median-ulnar-sensory/peakDifferenceMs', '1.3'], ['compare/right/median-ulnar-motor/motorLatencyDifferenceMs', '2.3'],
    ['compare/left/median-ulnar-sensory/onsetDifferenceMs', '0.2'], ['compare/left/median-ulnar-sensory/peakDifferenceMs', '0.3'],
  ])('%s prints %s', (key, print) => expect(find(assessed, key).print).toBe(print))
  it('has no number for the LEFT motor difference, and says why', () => {
    expect(find(assessed, 'compare/left/median-ulnar-motor/motorLatencyDifferenceMs')).toMatchObject({ print: 'not computable', value: { because: 'no left ulnar motor run' }, verdict: { kind: 'none' }, flagged: false })
  })
  it('prints the uncertainty of the velocities', () => {
    expect(results(assessed).filter(result => result.quantity === 'velocityMps').map(result => result.printUncertainty)).toEqual(['± 2', '± 2', '± 3', '± 3', '± 6', '± 2', '± 2', '± 3'])
  })
  it('lets the onset latency stand for the velocity that the set has no limit for', () => {
    expect(find(assessed, 'right-median-sensory/right-median-sensory-wrist/velocityMps').verdict).toEqual({ kind: 'no-limit', because: 'its limit comes from onset latency 3.3 ms at 140 mm, which stands for it' })
  })
  it('names the person the limits are for', () => expect(assessed.person.words).toBe('woman of 52, 162 cm, BMI 28.2'))
  it('finds nothing to stop or to check', () => expect(assessed.remarks.filter(remark => remark.strength !== 'note')).toEqual([]))
  it('says how much chance would do', () => {
    expect(assessed.chance).toMatchObject({ limitsApplied: 29, seenOutside: 6, sentence: '29 limits applied; about 0.9 would fall outside by chance in health. 6 do.' })
    expect(assessed.chance.expectedOutside).toBeCloseTo(0.87, 10)
  })
  it('names the set and how many of its rows are recalled', () => {
    expect(assessed.setsUsed).toMatchObject([{ setId: 'aanem-ndtf-2016', version: 1, recalledRows: 18, verifiedRows: 0 }])
  })
})

describe('with 4.2 typed instead of 5.2', () => {
  it('flags the forearm velocity of 43 below 51', () => {
    expect(find(slipped, 'right-median-motor/rmm-elbow/velocityMps')).toMatchObject({ print: '43', flagged: true, verdict: { kind: 'outside', direction: 'below', limit: { value: 51 } } })
  })
  it('drops the latency flag and that of the motor difference, now 1.3', () => {
    expect(find(slipped, 'right-median-motor/rmm-wrist/latencyMs').flagged).toBe(false)
    expect(find(slipped, 'compare/right/median-ulnar-motor/motorLatencyDifferenceMs')).toMatchObject({ print: '1.3', flagged: false, verdict: { kind: 'within' } })
  })
  it('makes anew the sentences that used it and leaves the others', () => {
    const changed = assessed.findings.filter(sentence => slipped.findings.find(one => one.key === sentence.key)?.fingerprint !== sentence.fingerprint)
    expect(changed.map(sentence => sentence.key)).toEqual(['run/right-median-motor', 'compare/right/median-ulnar-motor'])
  })
})

it('without an adopted set nothing is normal and nothing flagged', () => {
  const bare = assessStudy(carpalTunnelStudy(), referenceTables, defaultPolicy)
  expect(bare.flagged).toEqual([])
  expect(results(bare).some(result => result.verdict.kind === 'within')).toBe(false)
  expect(find({ ...bare }, 'right-median-motor/rmm-wrist/latencyMs').verdict).toEqual({ kind: 'no-limit', because: 'no set adopted here' })
})
it('without a height the BMI bands do not judge', () => {
  const unknown = assessStudy({ ...carpalTunnelStudy(), heightCm: null }, referenceTables, ndtfPolicy)
  expect(find(unknown, 'right-median-sensory/right-median-sensory-wrist/amplitudeUv').verdict).toEqual({ kind: 'not-judged', because: 'BMI missing' })
})
it('at seventeen there is no limit', () => {
  const young = assessStudy({ ...carpalTunnelStudy(), patient: { birthDate: '2009-03-14', sexForLimits: 'female' } }, referenceTables, ndtfPolicy)
  expect(find(young, 'right-median-motor/rmm-wrist/latencyMs').verdict).toEqual({ kind: 'no-limit', because: 'age 17 is outside 19 to 79' })
})
