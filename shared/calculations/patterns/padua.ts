import type { Side } from '../../schemas/common'
import { handFacts, type HandFacts } from './carpal-tunnel'
import type { Facts } from './facts'
import { criterion, every, negated, type CriterionText, type Finding } from './finding'
import type { Assessed, PatternSet } from './pattern-set'

const texts = {
  extreme: { id: 'extreme', text: 'Extreme: no motor response of the thenar (of 500 hands published first: no sensory response either)', basis: 'read' },
  severe: { id: 'severe', text: 'Severe: no sensory response, distal motor latency prolonged', basis: 'read' },
  moderate: { id: 'moderate', text: 'Moderate: finger to wrist velocity slow, distal motor latency prolonged', basis: 'read' },
  mild: { id: 'mild', text: 'Mild: finger to wrist velocity slow, distal motor latency normal', basis: 'read' },
  minimal: { id: 'minimal', text: 'Minimal: only a comparison or segmental test abnormal', basis: 'read' },
  negative: { id: 'negative', text: 'Negative: all tests normal', basis: 'read' },
} as const satisfies Record<string, CriterionText>

const classes = ['extreme', 'severe', 'moderate', 'mild', 'minimal', 'negative'] as const
type Class = (typeof classes)[number]

/**
 * Classes of carpal tunnel syndrome by Padua 1997, one per hand; the first that is met, from extreme down. A response
 * that is small but there is a response: 0.1 mV is not "extreme" here (this project's reading).
 */
export const padua: PatternSet = {
  id: 'padua-1997', version: 1, title: 'Carpal tunnel syndrome, classes of Padua', basis: 'read', scope: 'side',
  source: 'Padua L et al., Ital J Neurol Sci 1997;18:145-150, doi:10.1007/BF02048482 (600 hands); Acta Neurol Scand 1997, doi:10.1111/j.1600-0404.1997.tb00271.x (500 hands); abstracts read',
  criteria: Object.values(texts),
  assess: assessPadua,
}

function assessPadua(facts: Facts, side: Side): Assessed | null {
  const hand = handFacts(facts, side)
  if (!hand) return null
  const findings = findingsOf(hand)
  return { outcome: outcomeOf(hand, findings), criteria: classes.map(id => criterion(texts[id], findings[id])), runIds: hand.runIds }
}

function findingsOf({ motorAbsent, prolonged, inTime, sensoryAbsent, slow, sensitive }: HandFacts): Record<Class, Finding> {
  const [responds, present] = [negated(motorAbsent), negated(sensoryAbsent)]
  return {
    extreme: motorAbsent,
    severe: every(responds, sensoryAbsent, prolonged),
    moderate: every(responds, present, slow, prolonged),
    mild: every(responds, present, slow, inTime),
    minimal: every(responds, present, sensitive, negated(slow), inTime),
    negative: every(responds, present, negated(sensitive), negated(slow), inTime),
  }
}

function outcomeOf(hand: HandFacts, findings: Record<Class, Finding>): Assessed['outcome'] {
  const first = classes.find(id => findings[id].result !== 'not-met')
  if (first === undefined) return { met: 'not-assessable', label: `not classed: ${gapOf(hand)}` }
  if (findings[first].result === 'met') return { met: first === 'negative' ? 'not-met' : 'met', label: first }
  const open = classes.filter(id => findings[id].result !== 'not-met')
  return { met: 'not-assessable', label: `not classed: ${open.join(' or ')} not assessable` }
}

function gapOf({ sensoryAbsent }: HandFacts): string {
  return sensoryAbsent.result === 'met' ? 'no sensory response with a normal distal latency' : 'distal latency prolonged with a normal sensory study'
}
