import type { Side } from '../../schemas/common'
import { otherSide, sideWords } from '../words'
import { beyondLimit } from './criteria'
import { readingOf, type Facts, type RunFacts } from './facts'
import { allOf, criterion, negated, type CriterionText, type Finding } from './finding'
import type { Assessed, PatternSet } from './pattern-set'

const texts = {
  trigeminal: { id: 'trigeminal', text: 'Trigeminal pattern: stimulated on this side R1 and both R2 late or absent, stimulated on the other side all within their limits', basis: 'read' },
  facial: { id: 'facial', text: 'Facial pattern: responses recorded on this side late or absent whichever side is stimulated, those of the other side within their limits', basis: 'read' },
} as const satisfies Record<string, CriterionText>

/** Blink reflex: which pattern the six responses fit, one result per side. Late is by the limits of the sets in use. */
export const blinkPattern: PatternSet = {
  id: 'blink-pattern', version: 1, title: 'Blink reflex: trigeminal or facial pattern', basis: 'read', scope: 'side',
  source: 'Pattern read in a page based on Aminoff, Electromyography in Clinical Practice; limits are those of the sets in use',
  criteria: Object.values(texts),
  assess: assessBlink,
}

/** The three responses to stimulation of one side: late or absent? */
interface Responses { r1: Finding, same: Finding, other: Finding }

function assessBlink(facts: Facts, side: Side): Assessed | null {
  const [here, there] = [facts.run('blink', side), facts.run('blink', otherSide(side))]
  if (!here || !there) return null
  const [own, opposite] = [responsesOf(facts, here), responsesOf(facts, there)]
  const trigeminal = together([['R1', own.r1], ['R2', own.same], ['R2 other side', own.other]], allNormal(opposite))
  const facial = together([['R1', own.r1], ['R2', own.same], [`R2 after ${sideWords[otherSide(side)]} stimulation`, opposite.other]], [negated(own.other), negated(opposite.r1), negated(opposite.same)])
  const criteria = [criterion(texts.trigeminal, trigeminal), criterion(texts.facial, facial)]
  return { outcome: outcomeOf(trigeminal, facial), criteria, runIds: [here.id, there.id] }
}

function responsesOf(facts: Facts, run: RunFacts): Responses {
  const late = (quantity: string) => beyondLimit(facts, readingOf(facts, run, quantity), 'upper', true)
  return { r1: late('r1Ms'), same: late('r2IpsilateralMs'), other: late('r2ContralateralMs') }
}

const allNormal = ({ r1, same, other }: Responses) => [r1, same, other].map(negated)

/** All of the first late, all of the others within their limits; the numbers of the first. */
function together(late: readonly [string, Finding][], normal: readonly Finding[]): Finding {
  const result = allOf([...late.map(([, one]) => one.result), ...normal.map(one => one.result)])
  const numbers = late.filter(([, one]) => one.numbers).map(([name, one]) => `${name} ${one.numbers}`).join('; ')
  const reasons = [...late.map(([, one]) => one), ...normal].filter(one => one.result === 'not-assessable').map(one => one.because)
  return result === 'not-assessable' ? { result, numbers, because: [...new Set(reasons)].join('; ') } : { result, numbers }
}

function outcomeOf(trigeminal: Finding, facial: Finding): Assessed['outcome'] {
  if (trigeminal.result === 'met') return { met: 'met', label: 'trigeminal pattern' }
  if (facial.result === 'met') return { met: 'met', label: 'facial pattern' }
  const isKnown = trigeminal.result === 'not-met' && facial.result === 'not-met'
  return isKnown ? { met: 'not-met', label: 'neither pattern' } : { met: 'not-assessable', label: 'not assessable' }
}
