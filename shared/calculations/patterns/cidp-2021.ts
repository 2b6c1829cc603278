import { distalLatencyRule, durationRule, fAbsentRule, fallRule, fLatencyRule, pairOutside, riseRule, segmentOutside, velocityRule, type DurationLimits } from './demyelination'
import { decideOneNerve, decideParameter, idsMet, type Parameters } from './cidp-rules'
import { sensoryOf, sensoryRunIds, sensorySupport, sensoryTexts, summed } from './cidp-sensory'
import type { Facts } from './facts'
import { anyOf, criterion, notAssessable, type Criterion, type CriterionText, type Finding } from './finding'
import { motorNervesOf, runIdsOf, type MotorNerve } from './motor-nerves'
import { askEach } from './nerve-truths'
import { eachOnce, entrapmentCriterion, entrapmentText, type Assessed, type PatternSet } from './pattern-set'
import { isAbnormal } from './sensory-nerves'

/** ms, abnormal above, by low-frequency filter in Hz: Mitsuma 2015 as recalled. */
const durationLimits: DurationLimits = {
  2: { median: 8.4, ulnar: 9.6, fibular: 8.8, tibial: 9.2 },
  5: { median: 8.0, ulnar: 8.6, fibular: 8.5, tibial: 8.3 },
  10: { median: 7.8, ulnar: 8.5, fibular: 8.3, tibial: 8.2 },
  20: { median: 7.4, ulnar: 7.8, fibular: 8.1, tibial: 8.0 },
}

const texts = {
  a: { id: 'a', text: 'Distal motor latency at least 150 % of the upper limit in two nerves (the median at the wrist not counted if from carpal tunnel syndrome)', basis: 'memory' },
  b: { id: 'b', text: 'Motor velocity at most 70 % of the lower limit in two nerves', basis: 'memory' },
  c: { id: 'c', text: 'Shortest F latency at least 120 % of the upper limit in two nerves (150 % when the distal amplitude is below 80 % of its lower limit)', basis: 'memory' },
  d: { id: 'd', text: 'No F-waves in two nerves with a distal amplitude of at least 20 % of its lower limit, and another parameter in another nerve', basis: 'memory' },
  e: { id: 'e', text: 'Amplitude fall of at least 30 % (50 % from wrist to Erb\'s point), tibial nerve excluded, distal amplitude at least 20 % of its lower limit, in two nerves, or in one nerve and another parameter in another', basis: 'memory' },
  f: { id: 'f', text: 'Duration rise above 30 % (tibial nerve: at least 100 %) in two nerves', basis: 'memory' },
  g: { id: 'g', text: 'Distal duration above the limit for the low-frequency filter in one nerve and another parameter in another', basis: 'memory' },
  weak: { id: 'weak', text: 'Weakly supportive: any of these in one nerve (an absent F-wave alone is not counted here: this project\'s reading)', basis: 'memory' },
  sensory: { id: 'sensory', text: 'Sensory: latency, amplitude or velocity outside its limit in two nerves', basis: 'memory' },
} as const satisfies Record<string, CriterionText>

const strongIds = ['a', 'b', 'c', 'd', 'e', 'f', 'g'] as const

/**
 * Motor and sensory criteria of the EAN/PNS guideline of 2021 on CIDP. Rests on memory. Each nerve of each side counts
 * as one nerve; segments across entrapment sites are never used here.
 */
export const cidp2021: PatternSet = {
  id: 'cidp-ean-pns-2021', version: 1, title: 'CIDP, EAN/PNS 2021', basis: 'memory', scope: 'study',
  source: 'Van den Bergh PYK et al., Eur J Neurol 2021;28:3556-3583, doi:10.1111/ene.14959; where it differs from 2010, and the duration limits (Mitsuma 2015), recalled',
  criteria: [...Object.values(texts), ...sensoryTexts, entrapmentText],
  assess: assessCidp2021,
}

const rules = {
  a: { main: 'latency', alone: 2 },
  b: { main: 'velocity', alone: 2 },
  c: { main: 'fLatency', alone: 2 },
  d: { main: 'fAbsent', beside: 2 },
  e: { main: 'fall', alone: 2, beside: 1 },
  f: { main: 'rise', alone: 2 },
  g: { main: 'duration', beside: 1 },
} as const

function assessCidp2021(facts: Facts): Assessed | null {
  const nerves = motorNervesOf(facts)
  if (nerves.length < 2) return null
  const parameters = parameters2021(facts, nerves)
  const criteria = [
    ...strongIds.map(id => criterion(texts[id], decideParameter(parameters, nerves, rules[id]))),
    criterion(texts.weak, decideOneNerve(parameters)),
    criterion(texts.sensory, sensoryInTwo(facts)),
    ...sensorySupport(facts),
    entrapmentCriterion(facts),
  ]
  return { outcome: outcomeOf(criteria), criteria, runIds: eachOnce([...runIdsOf(nerves), ...sensoryRunIds(facts)]) }
}

function parameters2021(facts: Facts, nerves: readonly MotorNerve[]): Parameters {
  const medianAtWrist = facts.input.policy.leaveOutEntrapmentSites ? 'left-out' : 'open'
  return {
    latency: askEach(nerves, distalLatencyRule(facts, { op: 'at-least', full: 150 }, medianAtWrist)),
    velocity: askEach(nerves, velocityRule(facts, { op: 'at-most', full: 70 }, segmentOutside)),
    fLatency: askEach(nerves, fLatencyRule(facts, { op: 'at-least', full: 120, low: 150, lowBelow: 80 })),
    fAbsent: askEach(nerves, fAbsentRule(facts, 20)),
    fall: askEach(nerves, fallRule(facts, { fall: { op: 'at-least', value: 30 }, toErb: { op: 'at-least', value: 50 }, amplitudeAtLeastPercent: 20, withoutTibial: true, pairCounts: pairOutside })),
    rise: askEach(nerves, riseRule(facts, { op: 'above', value: 30 }, pairOutside, { tibial: { op: 'at-least', value: 100 } })),
    duration: askEach(nerves, durationRule(durationLimits, 'above')),
  }
}

function sensoryInTwo(facts: Facts): Finding {
  const nerves = sensoryOf(facts)
  if (nerves.length < 2) return notAssessable('fewer than two sensory nerves studied')
  return summed(nerves.map(nerve => ({ nerve, finding: isAbnormal(facts, nerve) })), 2)
}

function outcomeOf(criteria: readonly Criterion[]): Assessed['outcome'] {
  const truth = (ids: readonly string[]) => anyOf(criteria.filter(one => ids.includes(one.id)).map(one => one.result))
  const [strong, weak, sensory] = [truth(strongIds), truth(['weak']), truth(['sensory'])]
  const beside = sensory === 'met' ? '; sensory abnormal in two nerves' : sensory === 'not-met' ? '; sensory criterion not met' : '; sensory not assessable'
  if (strong === 'met') return { met: 'met', label: `strongly supportive (${idsMet(criteria, strongIds)})${beside}` }
  const open = strong === 'not-assessable' ? ', strongly supportive not assessable' : ''
  if (weak === 'met') return { met: 'met', label: `weakly supportive: in one nerve${open}${beside}` }
  const whole = anyOf([strong, weak])
  return { met: whole, label: whole === 'not-met' ? 'not met' : 'not met in what could be assessed' }
}
