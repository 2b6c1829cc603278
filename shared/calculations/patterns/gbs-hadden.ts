import type { Facts } from './facts'
import { allOf, anyOf, atLeast, criterion, notTruth, type Criterion, type CriterionText, type Finding, type Truth } from './finding'
import { amplitudeTable, anyFeature, featureCriterion, featuresOf, inNerves, isInexcitable, strictly, truthOf, withReason, type FeatureBars } from './gbs-features'
import { motorNervesOf, runIdsOf, type MotorNerve } from './motor-nerves'
import { namesMet, type RuleTable } from './nerve-truths'
import { entrapmentCriterion, entrapmentText, eachOnce, type Assessed, type PatternSet } from './pattern-set'

const bars: FeatureBars = {
  velocity: { op: 'below', full: 90, low: 85, lowBelow: 50 },
  latency: { op: 'above', full: 110, low: 120, lowBelow: 100 },
  fLatency: { op: 'above', full: 120 },
  fall: { bar: { op: 'above', value: 50 }, amplitudeAtLeastPercent: 20, withoutTibial: false },
}

const texts = {
  velocity: { id: 'velocity', text: 'Motor velocity below 90 % of the lower limit (85 % when the distal amplitude is below 50 % of its lower limit)', basis: 'memory' },
  latency: { id: 'latency', text: 'Distal motor latency above 110 % of the upper limit (120 % when the distal amplitude is below its lower limit)', basis: 'memory' },
  fall: { id: 'fall', text: 'Proximal to distal amplitude below 0.5 (a fall above 50 %) where the distal amplitude is at least 20 % of its lower limit', basis: 'memory' },
  fLatency: { id: 'f-latency', text: 'Shortest F latency above 120 % of the upper limit', basis: 'memory' },
  inexcitable: { id: 'inexcitable', text: 'Inexcitable: no distal motor response in any nerve, or in one nerve only, below 10 % of its lower limit', basis: 'memory' },
  demyelinating: { id: 'demyelinating', text: 'Primary demyelinating: one of these in two nerves, or two in one nerve when all others are inexcitable and its distal amplitude is at least 10 % of its lower limit', basis: 'memory' },
  axonal: { id: 'axonal', text: 'Primary axonal: none of these (one is allowed in one nerve whose distal amplitude is below 10 % of its lower limit), and a distal amplitude below 80 % of its lower limit in two nerves', basis: 'read' },
  normal: { id: 'normal', text: 'Normal: none of these, and no distal amplitude below its lower limit', basis: 'memory' },
} as const satisfies Record<string, CriterionText>

/** Guillain-Barré syndrome by Hadden 1998. Rests on memory. */
export const gbsHadden: PatternSet = {
  id: 'gbs-hadden-1998', version: 1, title: 'Guillain-Barré syndrome, Hadden 1998', basis: 'memory', scope: 'study',
  source: 'Hadden RDM et al., Ann Neurol 1998;44:780-788, doi:10.1002/ana.410440512 (abstract read); numbers recalled, the axonal wording read in PMC11615645, table 1',
  criteria: [...Object.values(texts), entrapmentText],
  assess: assessHadden,
}

interface Classes { inexcitable: Finding, demyelinating: Finding, axonal: Finding, normal: Finding }

function assessHadden(facts: Facts): Assessed | null {
  const nerves = motorNervesOf(facts)
  if (nerves.length < 2) return null
  const features = featuresOf(facts, nerves, bars)
  const each = (['velocity', 'latency', 'fall', 'fLatency'] as const).map(id => featureCriterion(texts[id], features[id], nerves))
  const classes = classesOf(facts, nerves, [features.velocity, features.latency, features.fall, features.fLatency], each)
  const criteria = [
    ...each,
    ...(['inexcitable', 'demyelinating', 'axonal', 'normal'] as const).map(id => criterion(texts[id], classes[id])),
    entrapmentCriterion(facts),
  ]
  return { outcome: outcomeOf(classes), criteria, runIds: eachOnce(runIdsOf(nerves)) }
}

function classesOf(facts: Facts, nerves: readonly MotorNerve[], tables: readonly RuleTable[], each: readonly Criterion[]): Classes {
  const any = anyFeature(tables, nerves)
  const below = (percent: number) => amplitudeTable(facts, nerves, { op: 'below', value: percent })
  const [under10, under80, low] = [below(10), below(80), below(100)]
  const inTwo = inNerves(any, nerves, 2)
  const demyelinating = strictly(anyOf([inTwo.result, twoInOne(tables, nerves, under10)]), each)
  const isFree = strictlyFree(allOf(nerves.map(nerve => isFreeOrSmall(tables, nerve, under10))), each)
  const oneAtMost = notTruth(atLeast(2, nerves.map(nerve => truthOf(any, nerve))))
  const axonal = inNerves(under80, nerves, 2)
  const isAnyLow = inNerves(low, nerves, 1)
  return {
    inexcitable: inexcitable(nerves, under10),
    demyelinating: withReason({ ...inTwo, result: demyelinating, numbers: namesMet(any) }, each),
    axonal: withReason({ ...axonal, result: allOf([isFree, oneAtMost, axonal.result]) }, each),
    normal: withReason({ ...isAnyLow, result: allOf([strictlyFree(notTruth(inNerves(any, nerves, 1).result), each), notTruth(isAnyLow.result)]) }, each),
  }
}

/** Free of features only where every feature could be looked at. */
const strictlyFree = (truth: Truth, each: readonly Criterion[]): Truth => notTruth(strictly(notTruth(truth), each))

/** No feature in this nerve, or one only while its amplitude is below 10 % of the limit. */
function isFreeOrSmall(tables: readonly RuleTable[], nerve: MotorNerve, under10: RuleTable): Truth {
  const truths = tables.map(table => truthOf(table, nerve))
  return anyOf([notTruth(anyOf(truths)), allOf([notTruth(atLeast(2, truths)), truthOf(under10, nerve)])])
}

/** Two features in the one nerve that still answers, where its amplitude is at least 10 % of the limit. */
function twoInOne(tables: readonly RuleTable[], nerves: readonly MotorNerve[], under10: RuleTable): Truth {
  const answering = nerves.filter(nerve => !isInexcitable(nerve))
  const [only] = answering
  if (!only || answering.length > 1) return 'not-met'
  return allOf([atLeast(2, tables.map(table => truthOf(table, only))), notTruth(truthOf(under10, only))])
}

function inexcitable(nerves: readonly MotorNerve[], under10: RuleTable): Finding {
  const answering = nerves.filter(nerve => !isInexcitable(nerve))
  const numbers = `${nerves.length - answering.length} of ${nerves.length} nerves without a response`
  const [only] = answering
  if (!only) return { result: 'met', numbers }
  if (answering.length > 1) return { result: 'not-met', numbers }
  return { result: truthOf(under10, only), numbers: `${numbers}; ${only.name} ${under10.get(only)?.words ?? ''}` }
}

/** The first class that is met, in the order of the paper; equivocal when none is and all could be assessed. */
function outcomeOf({ inexcitable, demyelinating, axonal, normal }: Classes): Assessed['outcome'] {
  if (inexcitable.result === 'met') return { met: 'met', label: 'inexcitable' }
  if (demyelinating.result === 'met') return { met: 'met', label: 'primary demyelinating' }
  if (axonal.result === 'met') return { met: 'met', label: 'primary axonal' }
  if (normal.result === 'met') return { met: 'not-met', label: 'normal' }
  const isKnown = [inexcitable, demyelinating, axonal, normal].every(({ result }) => result !== 'not-assessable')
  return isKnown ? { met: 'not-met', label: 'equivocal' } : { met: 'not-assessable', label: 'no class met in what could be assessed' }
}
