import { fAbsentRule } from './demyelination'
import type { Facts } from './facts'
import { allOf, anyOf, criterion, joined, notTruth, type CriterionText, type Finding } from './finding'
import { amplitudeTable, anyFeature, featureCriterion, featuresOf, inNerves, strictly, type FeatureBars } from './gbs-features'
import { motorNervesOf, runIdsOf, type MotorNerve } from './motor-nerves'
import { askEach, decideNerves, namesMet, nerveWords, withOther, type RuleTable } from './nerve-truths'
import { entrapmentCriterion, entrapmentText, eachOnce, type Assessed, type PatternSet } from './pattern-set'

const bars: FeatureBars = {
  velocity: { op: 'below', full: 70 },
  latency: { op: 'above', full: 150 },
  fLatency: { op: 'above', full: 120, low: 150, lowBelow: 50 },
  fall: { bar: { op: 'above', value: 30 }, amplitudeAtLeastPercent: 0, withoutTibial: true },
}

const texts = {
  velocity: { id: 'velocity', text: 'Motor velocity below 70 % of the lower limit', basis: 'memory' },
  latency: { id: 'latency', text: 'Distal motor latency above 150 % of the upper limit', basis: 'memory' },
  fLatency: { id: 'f-latency', text: 'Shortest F latency above 120 % of the upper limit (150 % when the distal amplitude is below 50 % of its lower limit)', basis: 'memory' },
  fAbsent: { id: 'f-absent', text: 'No F-waves in two nerves with a distal amplitude of at least 20 % of its lower limit, and another parameter in another nerve', basis: 'memory' },
  fall: { id: 'fall', text: 'Proximal to distal amplitude below 0.7 (a fall above 30 %), tibial nerve excluded, in two nerves, and another parameter in another nerve', basis: 'memory' },
  demyelinating: { id: 'demyelinating', text: 'Demyelinating: velocity, distal latency or F latency in two nerves, or one of the two rules on absent F-waves and amplitude falls', basis: 'memory' },
  axonal: { id: 'axonal', text: 'Axonal: not demyelinating, and in two nerves a distal amplitude below 80 % of its lower limit, or absent F-waves, or an amplitude fall above 30 %; or absent F-waves in one nerve and one of the others in another', basis: 'memory' },
} as const satisfies Record<string, CriterionText>

/** Guillain-Barré syndrome by Rajabally 2015. Rests on memory, of medium confidence. */
export const gbsRajabally: PatternSet = {
  id: 'gbs-rajabally-2015', version: 1, title: 'Guillain-Barré syndrome, Rajabally 2015', basis: 'memory', scope: 'study',
  source: 'Rajabally YA et al., J Neurol Neurosurg Psychiatry 2015;86:115-119, doi:10.1136/jnnp-2014-307815 (DOI from memory); recalled',
  criteria: [...Object.values(texts), entrapmentText],
  assess: assessRajabally,
}

function assessRajabally(facts: Facts): Assessed | null {
  const nerves = motorNervesOf(facts)
  if (nerves.length < 2) return null
  const features = { ...featuresOf(facts, nerves, bars), fAbsent: askEach(nerves, fAbsentRule(facts, 20)) }
  const three = anyFeature([features.velocity, features.latency, features.fLatency], nerves)
  const inTwo = inNerves(three, nerves, 2)
  const fAbsent = besideOther(features.fAbsent, anyFeature([three, features.fall], nerves), nerves)
  const fall = besideOther(features.fall, three, nerves)
  const each = (['velocity', 'latency', 'fLatency'] as const).map(id => featureCriterion(texts[id], features[id], nerves))
  const demyelinating: Finding = { result: strictly(anyOf([inTwo.result, fAbsent.result, fall.result]), each), numbers: namesMet(three), ...(inTwo.because && { because: inTwo.because }) }
  const axonal = axonalOf(facts, nerves, features, demyelinating)
  const criteria = [
    ...each,
    criterion(texts.fAbsent, fAbsent), criterion(texts.fall, fall),
    criterion(texts.demyelinating, demyelinating), criterion(texts.axonal, axonal),
    entrapmentCriterion(facts),
  ]
  return { outcome: outcomeOf(demyelinating, axonal), criteria, runIds: eachOnce(runIdsOf(nerves)) }
}

/** In two nerves, and one of the others in another nerve. */
function besideOther(main: RuleTable, other: RuleTable, nerves: readonly MotorNerve[]): Finding {
  return decideNerves(main, 2, holds => withOther(nerves, 2, nerve => holds(main, nerve), nerve => holds(other, nerve)))
}

function axonalOf(facts: Facts, nerves: readonly MotorNerve[], { fAbsent, fall }: Record<'fAbsent' | 'fall', RuleTable>, demyelinating: Finding): Finding {
  const low = amplitudeTable(facts, nerves, { op: 'below', value: 80 })
  const lowOrFall = anyFeature([low, fall], nerves)
  const one = decideNerves(fAbsent, 1, holds => withOther(nerves, 1, nerve => holds(fAbsent, nerve), nerve => holds(lowOrFall, nerve)))
  const parts = [inNerves(low, nerves, 2), inNerves(fAbsent, nerves, 2), inNerves(fall, nerves, 2), one]
  const result = allOf([notTruth(demyelinating.result), anyOf(parts.map(part => part.result))])
  const because = result === 'not-assessable' ? joined([demyelinating, ...parts].map(part => part.because)) || 'no amplitude or F-wave of two nerves to judge' : ''
  return { result, numbers: nerveWords(low, ['met', 'not-met']), ...(because && { because }) }
}

function outcomeOf(demyelinating: Finding, axonal: Finding): Assessed['outcome'] {
  if (demyelinating.result === 'met') return { met: 'met', label: 'demyelinating' }
  if (axonal.result === 'met') return { met: 'met', label: 'axonal' }
  if (demyelinating.result === 'not-met' && axonal.result === 'not-met') return { met: 'not-met', label: 'neither demyelinating nor axonal' }
  return { met: 'not-assessable', label: demyelinating.result === 'not-met' ? 'not demyelinating; axonal not assessable' : 'not demyelinating in what could be assessed' }
}
