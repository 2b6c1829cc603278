import type { Side } from '../../schemas/common'
import type { Facts } from './facts'
import { atLeast, criterion, negated, notAssessable, type Bar, type CriterionText, type Finding } from './finding'
import { amplitudeFallIn, amplitudeFallOwn, slowSegment, velocityDropIn, type SegmentQuestion } from './localised'
import { eachOnce, type Assessed, type PatternSet } from './pattern-set'
import { isAbnormal, isLow, sensoryNerve } from './sensory-nerves'

const SEGMENT = 'across-fibular-head'
/** m/s: mean - 2 SD of 242 healthy people (read). */
const publishedDrop: Bar = { op: 'above', value: 10 }
/** Per cent: the same 242 people (read). */
const publishedFall: Bar = { op: 'above', value: 25 }
/** Per cent; sources print 20 to 50 (read). */
const anteriorFall: Bar = { op: 'above', value: 20 }
const NEEDED = 2

const texts = {
  velocity: { id: 'edb-velocity', text: 'EDB: velocity across the fibular head below the limit of the sets in use', basis: 'read' },
  drop: { id: 'edb-drop', text: 'EDB: velocity across the head slower than in the leg by more than the normal drop (the limit of the sets in use, else 10 m/s)', basis: 'read' },
  fall: { id: 'edb-amplitude', text: 'EDB: amplitude fall across the head above the normal fall (the limit of the sets in use, else 25 %)', basis: 'read' },
  anteriorVelocity: { id: 'ta-velocity', text: 'TA: velocity across the fibular head below the limit of the sets in use', basis: 'read' },
  anteriorFall: { id: 'ta-amplitude', text: 'TA: amplitude fall across the head above 20 % (sources print 20 to 50)', basis: 'read' },
  superficial: { id: 'superficial-fibular', text: 'Beside: superficial fibular sensory response low or absent', basis: 'memory' },
  sural: { id: 'sural-spared', text: 'Beside: sural response within its limits (against a sciatic lesion or a polyneuropathy)', basis: 'memory' },
} as const satisfies Record<string, CriterionText>

/** Fibular neuropathy at the knee: two concordant findings across the fibular head, in one muscle or in two. */
export const fibularKnee: PatternSet = {
  id: 'fibular-knee', version: 1, title: 'Fibular nerve at the knee', basis: 'read', scope: 'side',
  source: 'Buschbacher RM, fibular motor to EDB, Am J Phys Med Rehabil 1999;78(6 Suppl):S26-S31, doi:10.1097/00002060-199911001-00006 (pages and DOI from memory; n = 242, abstract read); tibialis anterior: a teaching page (read); which nerves help: Marciniak C et al., Muscle Nerve 2005;31:520-527, from memory',
  criteria: Object.values(texts),
  assess: assessKnee,
}

function assessKnee(facts: Facts, side: Side): Assessed | null {
  const [edb, ta] = (['fibular-motor-edb', 'fibular-motor-ta'] as const).map(technique => questionFor(facts, technique, side))
  const counted: [CriterionText, Finding][] = []
  if (edb) counted.push([texts.velocity, slowSegment(edb)], [texts.drop, velocityDropIn(edb, publishedDrop)], [texts.fall, amplitudeFallOwn(edb, publishedFall)])
  if (ta) counted.push([texts.anteriorVelocity, slowSegment(ta)], [texts.anteriorFall, amplitudeFallIn(ta, anteriorFall)])
  if (counted.length === 0) return null
  const sensory = { superficial: facts.run('superficial-fibular', side), sural: facts.run('sural', side) }
  const criteria = [
    ...counted.map(([text, finding]) => criterion(text, finding)),
    criterion(texts.superficial, sensory.superficial ? isLow(facts, sensoryNerve(facts, sensory.superficial, 'superficial-fibular', side)) : notAssessable('not recorded')),
    criterion(texts.sural, sensory.sural ? negated(isAbnormal(facts, sensoryNerve(facts, sensory.sural, 'sural', side))) : notAssessable('not recorded')),
  ]
  const runIds = eachOnce([edb?.run?.id, ta?.run?.id, sensory.superficial?.id, sensory.sural?.id])
  return { outcome: outcomeOf(counted.map(([, finding]) => finding), criteria.at(-1)?.result === 'not-met'), criteria, runIds }
}

function questionFor(facts: Facts, technique: string, side: Side): SegmentQuestion | null {
  const run = facts.run(technique, side)
  const isStimulated = run?.assessment.results.some(result => result.at === 'above-fibular-head')
  return run && isStimulated ? { facts, run, segment: SEGMENT } : null
}

function outcomeOf(findings: readonly Finding[], suralOutside: boolean): Assessed['outcome'] {
  const met = atLeast(NEEDED, findings.map(({ result }) => result))
  const found = `${findings.filter(({ result }) => result === 'met').length} of ${findings.length} findings`
  const beside = suralOutside ? '; sural nerve outside its limits too' : ''
  if (met === 'met') return { met, label: `${found}${beside}` }
  return { met, label: met === 'not-assessable' ? `${found}, others not assessable${beside}` : `${found}, ${NEEDED} asked for${beside}` }
}
