import { shareOf } from './criteria'
import type { Facts } from './facts'
import { motorNervesOf, runIdsOf } from './motor-nerves'
import { allOf, criterion, joined, notTruth, passes, type CriterionText, type Finding } from './finding'
import { amplitudeTable, anyFeature, featureCriterion, featuresOf, inNerves, strictly, withReason, type FeatureBars } from './gbs-features'
import { namesMet } from './nerve-truths'
import { entrapmentCriterion, entrapmentText, eachOnce, type Assessed, type PatternSet } from './pattern-set'
import { isSilent, sensoryNervesOf } from './sensory-nerves'

const bars: FeatureBars = {
  velocity: { op: 'below', full: 90, low: 85, lowBelow: 50 },
  latency: { op: 'above', full: 110, low: 120, lowBelow: 100 },
  fLatency: { op: 'above', full: 120 },
  rise: { op: 'above', value: 30 },
}

const texts = {
  velocity: { id: 'velocity', text: 'Motor velocity below 90 % of the lower limit (85 % when the distal amplitude is below 50 % of its lower limit)', basis: 'read' },
  latency: { id: 'latency', text: 'Distal motor latency above 110 % of the upper limit (120 % when the distal amplitude is below its lower limit)', basis: 'read' },
  rise: { id: 'rise', text: 'Duration rise above 30 %: unequivocal dispersion', basis: 'read' },
  fLatency: { id: 'f-latency', text: 'Shortest F latency above 120 % of the upper limit', basis: 'read' },
  demyelinating: { id: 'demyelinating', text: 'Demyelinating: one of these in two nerves', basis: 'read' },
  axonal: { id: 'axonal', text: 'Beside: not demyelinating, and a distal motor amplitude below 80 % of its lower limit', basis: 'memory' },
  sensory: { id: 'axonal-sensory', text: 'Beside: a sensory amplitude below 50 % of its lower limit as well', basis: 'memory' },
} as const satisfies Record<string, CriterionText>

/** Guillain-Barré syndrome by Ho 1995. The axonal part rests on memory and decides nothing. */
export const gbsHo: PatternSet = {
  id: 'gbs-ho-1995', version: 1, title: 'Guillain-Barré syndrome, Ho 1995', basis: 'read', scope: 'study',
  source: 'Ho TW et al., Brain 1995;118:597-605, doi:10.1093/brain/118.3.597 (DOI from memory); demyelinating row read in a comparison of six sets, axonal wording recalled',
  criteria: [...Object.values(texts), entrapmentText],
  assess: assessHo,
}

function assessHo(facts: Facts): Assessed | null {
  const nerves = motorNervesOf(facts)
  if (nerves.length < 2) return null
  const features = featuresOf(facts, nerves, bars)
  const any = anyFeature([features.velocity, features.latency, features.rise, features.fLatency], nerves)
  const each = (['velocity', 'latency', 'rise', 'fLatency'] as const).map(id => featureCriterion(texts[id], features[id], nerves))
  const inTwo = inNerves(any, nerves, 2)
  const demyelinating = withReason({ ...inTwo, result: strictly(inTwo.result, each), numbers: namesMet(any) }, each)
  const low = inNerves(amplitudeTable(facts, nerves, { op: 'below', value: 80 }), nerves, 1)
  const criteria = [
    ...each,
    criterion(texts.demyelinating, demyelinating),
    criterion(texts.axonal, withReason({ ...low, result: allOf([notTruth(demyelinating.result), low.result]) }, [demyelinating])),
    criterion(texts.sensory, lowSensory(facts)),
    entrapmentCriterion(facts),
  ]
  const label = demyelinating.result === 'met' ? 'demyelinating' : demyelinating.result === 'not-met' ? 'not demyelinating' : 'not demyelinating in what could be assessed'
  return { outcome: { met: demyelinating.result, label }, criteria, runIds: eachOnce(runIdsOf(nerves)) }
}

function lowSensory(facts: Facts): Finding {
  const nerves = sensoryNervesOf(facts).map((nerve) => {
    const share = isSilent(nerve) ? { percent: 0 } : shareOf(facts, nerve.amplitude, 'lower')
    return { nerve, share }
  })
  const known = nerves.filter(({ share }) => typeof share !== 'string')
  const low = known.filter(({ share }) => typeof share !== 'string' && passes(share.percent, { op: 'below', value: 50 }))
  if (low.length > 0) return { result: 'met', numbers: low.map(({ nerve }) => nerve.name).join(', ') }
  if (known.length < nerves.length || nerves.length === 0) return { result: 'not-assessable', numbers: '', because: joined(nerves.map(({ share }) => typeof share === 'string' ? share : '')) || 'no sensory nerve studied' }
  return { result: 'not-met', numbers: 'none' }
}
