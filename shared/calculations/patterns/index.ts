import { sides, type Side } from '../../schemas/common'
import type { PatternResult } from '../types'
import { isOn, patternSets } from './all-sets'
import { factsOf, type Facts } from './facts'
import type { PatternInput } from './pattern-input'
import type { PatternSet } from './pattern-set'

export { isOn, patternSets } from './all-sets'
export type { PatternInput } from './pattern-input'
export type { PatternSet } from './pattern-set'

const RECALLED = 'Judged with limits that are recalled, not verified.'

/**
 * The published criteria as check lists: each criterion met, not met or not assessable, with the numbers it used. Offered
 * to the reader, never concluded. Only sets that are in use and whose nerves were studied; runs that are cold or were
 * repeated warm do not count.
 *
 * @example
 * assessPatterns(input).find(one => one.id === 'bland-2000' && one.side === 'right')?.outcome.label // => 'grade 3, moderate'
 */
export function assessPatterns(input: PatternInput): PatternResult[] {
  const facts = factsOf(input)
  const results: PatternResult[] = []
  for (const set of patternSets) {
    if (!isOn(set, input.policy)) continue
    for (const side of set.scope === 'side' ? sides : wholeStudy) {
      const result = resultOf(set, facts, side)
      if (result) results.push(result)
    }
  }
  return results
}

const wholeStudy = [undefined] as const

function resultOf(set: PatternSet, facts: Facts, side: Side | undefined): PatternResult | null {
  facts.usedRecalled = false
  const assessed = set.assess(facts, side ?? 'right')
  if (!assessed) return null
  const source = facts.usedRecalled ? `${set.source}. ${RECALLED}` : set.source
  const { id, version, title, basis } = set
  const { outcome, criteria } = assessed
  const runIds = [...assessed.runIds]
  return side ? { id, version, title, side, source, basis, outcome, criteria, runIds } : { id, version, title, source, basis, outcome, criteria, runIds }
}
