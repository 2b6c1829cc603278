import { distalLatencyRule, durationRule, fAbsentRule, fallRule, fLatencyRule, pairOutside, riseRule, segmentOutside, velocityRule, type DurationLimits } from './demyelination'
import { decideOneNerve, decideParameter, idsMet, type Parameters } from './cidp-rules'
import type { Facts } from './facts'
import { anyOf, criterion, type Criterion, type CriterionText, type Truth } from './finding'
import { motorNervesOf, runIdsOf, type MotorNerve } from './motor-nerves'
import { askEach, type RuleTable } from './nerve-truths'
import { entrapmentCriterion, entrapmentText, eachOnce, type Assessed, type PatternSet } from './pattern-set'
import { sensorySupport, sensoryRunIds, sensoryTexts } from './cidp-sensory'

/** ms, abnormal from this value on; of the time of 20 Hz low-frequency filters. */
const durationLimits: DurationLimits = { 20: { median: 6.6, ulnar: 6.7, fibular: 7.6, tibial: 8.8 } }

const texts = {
  a: { id: 'a', text: 'Distal motor latency at least 150 % of the upper limit in two nerves (the median at the wrist not counted if from carpal tunnel syndrome)', basis: 'read' },
  b: { id: 'b', text: 'Motor velocity at most 70 % of the lower limit in two nerves', basis: 'read' },
  c: { id: 'c', text: 'Shortest F latency at least 130 % of the upper limit in two nerves (150 % when the distal amplitude is below 80 % of its lower limit)', basis: 'read' },
  d: { id: 'd', text: 'No F-waves in two nerves with a distal amplitude of at least 20 % of its lower limit, and another parameter in another nerve', basis: 'read' },
  e: { id: 'e', text: 'Amplitude fall of at least 50 % in two nerves with a distal amplitude of at least 20 % of its lower limit, or in one nerve and another parameter in another', basis: 'read' },
  f: { id: 'f', text: 'Duration rise above 30 % in two nerves', basis: 'read' },
  g: { id: 'g', text: 'Distal duration at least 6.6 ms median, 6.7 ulnar, 7.6 fibular, 8.8 tibial (low-frequency filter 20 Hz) in one nerve and another parameter in another', basis: 'read' },
  probable: { id: 'probable', text: 'Probable: amplitude fall of at least 30 % (50 % from wrist to Erb\'s point), tibial nerve excluded, in two nerves, or in one nerve and another parameter in another', basis: 'read' },
  possible: { id: 'possible', text: 'Possible: any of these in one nerve (an absent F-wave alone is not counted here: this project\'s reading)', basis: 'read' },
} as const satisfies Record<string, CriterionText>

const definiteIds = ['a', 'b', 'c', 'd', 'e', 'f', 'g'] as const

/**
 * Electrodiagnostic criteria of chronic inflammatory demyelinating polyradiculoneuropathy, EFNS/PNS 2010. Each nerve of
 * each side counts as one nerve. Ulnar stimulated below the elbow, fibular below the head: segments across entrapment
 * sites are never used here.
 */
export const cidp2010: PatternSet = {
  id: 'cidp-efns-pns-2010', version: 1, title: 'CIDP, EFNS/PNS 2010', basis: 'read', scope: 'study',
  source: 'Van den Bergh PYK et al., EFNS/PNS guideline, first revision, Eur J Neurol 2010;17:356-363, doi:10.1111/j.1468-1331.2009.02930.x, also J Peripher Nerv Syst 2010;15:1-9 (citation read); conditions read in a university teaching page, percentages and durations in PMC8108415, table 2',
  criteria: [...Object.values(texts), ...sensoryTexts, entrapmentText],
  assess: assessCidp2010,
}

function assessCidp2010(facts: Facts): Assessed | null {
  const nerves = motorNervesOf(facts)
  if (nerves.length < 2) return null
  const parameters = parameters2010(facts, nerves)
  const decide = (id: Exclude<keyof typeof texts, 'probable' | 'possible'>) => criterion(texts[id], decideParameter(parameters, nerves, rules[id]))
  const probable = { ...parameters, fall: fallTable(facts, nerves, 30) }
  const criteria = [
    ...definiteIds.map(decide),
    criterion(texts.probable, decideParameter(probable, nerves, rules.e)),
    criterion(texts.possible, decideOneNerve(probable)),
    ...sensorySupport(facts),
    entrapmentCriterion(facts),
  ]
  return { outcome: outcomeOf(criteria), criteria, runIds: eachOnce([...runIdsOf(nerves), ...sensoryRunIds(facts)]) }
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

function parameters2010(facts: Facts, nerves: readonly MotorNerve[]): Parameters {
  const medianAtWrist = facts.input.policy.leaveOutEntrapmentSites ? 'left-out' : 'open'
  return {
    latency: askEach(nerves, distalLatencyRule(facts, { op: 'at-least', full: 150 }, medianAtWrist)),
    velocity: askEach(nerves, velocityRule(facts, { op: 'at-most', full: 70 }, segmentOutside)),
    fLatency: askEach(nerves, fLatencyRule(facts, { op: 'at-least', full: 130, low: 150, lowBelow: 80 })),
    fAbsent: askEach(nerves, fAbsentRule(facts, 20)),
    fall: fallTable(facts, nerves, 50),
    rise: askEach(nerves, riseRule(facts, { op: 'above', value: 30 }, pairOutside)),
    duration: askEach(nerves, durationRule(durationLimits, 'at-least')),
  }
}

function fallTable(facts: Facts, nerves: readonly MotorNerve[], percent: 50 | 30): RuleTable {
  return askEach(nerves, fallRule(facts, {
    fall: { op: 'at-least', value: percent }, toErb: { op: 'at-least', value: 50 }, amplitudeAtLeastPercent: 20, withoutTibial: percent === 30, pairCounts: pairOutside,
  }))
}

function outcomeOf(criteria: readonly Criterion[]): Assessed['outcome'] {
  const of = (ids: readonly string[]): Truth => anyOf(criteria.filter(one => ids.includes(one.id)).map(one => one.result))
  const [definite, probable, possible] = [of(definiteIds), of(['probable']), of(['possible'])]
  if (definite === 'met') return { met: 'met', label: `definite (${idsMet(criteria, definiteIds)})` }
  const open = definite === 'not-assessable' ? ', definite not assessable' : ''
  if (probable === 'met') return { met: 'met', label: `probable${open}` }
  if (possible === 'met') return { met: 'met', label: `possible: in one nerve${open}` }
  const whole = anyOf([definite, probable, possible])
  return { met: whole, label: whole === 'not-met' ? 'not met' : 'not met in what could be assessed' }
}
