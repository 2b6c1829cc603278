import type { Side } from '../../schemas/common'
import { againstBar } from './criteria'
import { comparisonReading, type Facts } from './facts'
import { allOf, criterion, either, type CriterionText, type Truth } from './finding'
import { eachOnce, type Assessed, type PatternSet } from './pattern-set'

const techniques = ['median-motor-apb', 'ulnar-motor-fdi', 'ulnar-motor-adm'] as const

const texts = {
  high: { id: 'below-7-2', text: 'Split-hand index (APB x FDI / ADM) below 7.2 (Neurol Int 2022;14:707-715, doi:10.3390/neurolint14030059)', basis: 'read' },
  original: { id: 'below-5-2', text: 'Below 5.2, the original cut-off (Menon P et al., Clin Neurophysiol 2013;124:410-416)', basis: 'memory' },
  low: { id: 'below-5-04', text: 'Below 5.04 (sensitivity 82.1 %, specificity 85.7 %; Bangladesh J Neurosci 37(1), doi:10.3329/bjn.v37i1.87136)', basis: 'read' },
} as const satisfies Record<string, CriterionText>

/** Split-hand index, one per hand: supporting only, never standing alone. */
export const splitHand: PatternSet = {
  id: 'split-hand-index', version: 1, title: 'Split hand (supporting only)', basis: 'read', scope: 'side',
  source: 'Neurol Int 2022;14:707-715, doi:10.3390/neurolint14030059; Bangladesh J Neurosci 37(1), doi:10.3329/bjn.v37i1.87136; the original cut-off from memory',
  criteria: Object.values(texts),
  assess: assessSplitHand,
}

function assessSplitHand(facts: Facts, side: Side): Assessed | null {
  const runs = techniques.map(technique => facts.run(technique, side))
  if (runs.includes(undefined)) return null
  const reading = comparisonReading(facts, 'split-hand', side, 'splitHandIndex')
  const [high, original, low] = [7.2, 5.2, 5.04].map(value => againstBar(reading, { op: 'below', value }))
  const criteria = [criterion(texts.high, high!), criterion(texts.original, original!), criterion(texts.low, low!)]
  const met = allOf([high!.result, low!.result])
  return { outcome: outcomeOf(met, either(high!, low!).result), criteria, runIds: eachOnce(runs.map(run => run?.id)) }
}

/** Below one cut-off only: the cut-offs disagree, so it stays open. */
function outcomeOf(both: Truth, one: Truth): Assessed['outcome'] {
  if (both === 'met') return { met: 'met', label: 'below every cut-off that was read' }
  if (one === 'met') return { met: 'not-assessable', label: 'between the published cut-offs' }
  return both === 'not-assessable' ? { met: both, label: 'not computable' } : { met: 'not-met', label: 'above the cut-offs' }
}
