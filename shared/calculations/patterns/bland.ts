import type { Side } from '../../schemas/common'
import { againstBar } from './criteria'
import { handFacts, type HandFacts } from './carpal-tunnel'
import type { Facts } from './facts'
import { criterion, either, every, named, negated, passes, plainNumber, quiet, type Bar, type CriterionText, type Finding } from './finding'
import type { Assessed, PatternSet } from './pattern-set'

/** ms; exactly 6.5 is not above it: this project's reading, since the paper leaves it open. */
const veryLong: Bar = { op: 'above', value: 6.5 }
/** mV. */
const unrecordable: Bar = { op: 'below', value: 0.2 }
/** ms: above it a sensory response that is still there is unusual. Clin Neurol Neurosurg 2016;148:45-48, doi:10.1016/j.clineuro.2016.06.019 (read). */
const unusualWithResponse: Bar = { op: 'above', value: 7.7 }

const texts = {
  6: { id: '6', text: 'Grade 6: no sensory response, and motor amplitude below 0.2 mV', basis: 'read' },
  5: { id: '5', text: 'Grade 5: distal motor latency above 6.5 ms', basis: 'read' },
  4: { id: '4', text: 'Grade 4: no sensory response, distal motor latency prolonged but not above 6.5 ms', basis: 'read' },
  3: { id: '3', text: 'Grade 3: sensory response present but slow, distal motor latency prolonged but not above 6.5 ms', basis: 'read' },
  2: { id: '2', text: 'Grade 2: finger to wrist velocity slow, distal motor latency normal', basis: 'read' },
  1: { id: '1', text: 'Grade 1: only the most sensitive tests abnormal (comparison of two nerves, palm to wrist)', basis: 'read' },
  0: { id: '0', text: 'Grade 0: no abnormality', basis: 'read' },
} as const satisfies Record<number, CriterionText>

const grades = [6, 5, 4, 3, 2, 1, 0] as const
type Grade = (typeof grades)[number]
const names: Record<Grade, string> = { 6: 'extremely severe', 5: 'very severe', 4: 'severe', 3: 'moderate', 2: 'mild', 1: 'very mild', 0: 'normal' }

/**
 * Grades of carpal tunnel syndrome by Bland 2000, one per hand. Looked at from 6 down to 0; the first that is met is the
 * grade. "Prolonged", "slow" and "normal" are by the limits of the sets in use.
 *
 * What the paper leaves open, decided here: a latency of exactly 6.5 ms is not above 6.5 ms. No sensory response with a
 * normal distal latency is not graded. A prolonged distal latency with a normal sensory study is not graded.
 */
export const bland: PatternSet = {
  id: 'bland-2000', version: 1, title: 'Carpal tunnel syndrome, grades of Bland', basis: 'read', scope: 'side',
  source: 'Bland JDP, Muscle Nerve 2000;23:1280-1283, doi:10.1002/1097-4598(200008)23:8<1280::aid-mus20>3.0.co;2-y (abstract read)',
  criteria: [...grades].map(grade => texts[grade]),
  assess: assessBland,
}

function assessBland(facts: Facts, side: Side): Assessed | null {
  const hand = handFacts(facts, side)
  if (!hand) return null
  const findings = findingsOf(hand)
  const criteria = grades.map(grade => criterion(texts[grade], findings[grade]))
  return { outcome: outcomeOf(hand, findings), criteria, runIds: hand.runIds }
}

function findingsOf(hand: HandFacts): Record<Grade, Finding> {
  const { motorAbsent, prolonged, inTime, sensoryAbsent, slow, sensitive } = hand
  const isLong = motorAbsent.result === 'met' ? { ...motorAbsent, result: 'not-met' as const } : named('distal latency', againstBar(hand.latency, veryLong))
  const isLost = motorAbsent.result === 'met' ? motorAbsent : named('motor amplitude', againstBar(hand.amplitude, unrecordable))
  const [present, notLong] = [negated(sensoryAbsent), quiet(negated(isLong))]
  return {
    6: every(sensoryAbsent, isLost),
    5: withRemark(hand, isLong),
    4: every(sensoryAbsent, prolonged, notLong),
    3: every(present, prolonged, notLong, either(slow, sensitive)),
    2: every(present, slow, inTime),
    1: every(present, sensitive, negated(slow), inTime),
    0: every(present, negated(sensitive), negated(slow), inTime),
  }
}

function withRemark({ sensoryAbsent, latency }: HandFacts, long: Finding): Finding {
  const isUnusual = long.result === 'met' && sensoryAbsent.result === 'not-met' && passes(latency.value, unusualWithResponse)
  return isUnusual ? { ...long, because: `a sensory response is unusual with a latency above ${plainNumber(unusualWithResponse.value)} ms: check stimulation and recording` } : long
}

/** The first grade that is met, if none before it is open; otherwise why there is none. */
function outcomeOf(hand: HandFacts, findings: Record<Grade, Finding>): Assessed['outcome'] {
  const first = grades.find(grade => findings[grade].result !== 'not-met')
  if (first === undefined) return { met: 'not-assessable', label: `not graded: ${gapOf(hand)}` }
  if (findings[first].result === 'met') return { met: first === 0 ? 'not-met' : 'met', label: `grade ${first}, ${names[first]}` }
  const open = grades.filter(grade => findings[grade].result !== 'not-met')
  return { met: 'not-assessable', label: open.length === 1 ? `not graded; grade ${first} not assessable` : `not graded: grade ${open.slice(0, -1).join(', ')} or ${open[open.length - 1]} possible` }
}

/** The gaps of the scale, in words. */
function gapOf({ sensoryAbsent, prolonged }: HandFacts): string {
  if (sensoryAbsent.result === 'met') return 'no sensory response with a normal distal latency'
  return prolonged.result === 'met' ? 'distal latency prolonged with a normal sensory study' : 'no motor response with a sensory response present'
}
