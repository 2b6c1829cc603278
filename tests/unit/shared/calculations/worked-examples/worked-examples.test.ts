import { describe, expect, it } from 'vitest'
import { calculationChecks } from './calculations'
import { allExamples, restsOn } from './harness'
import { awaitingPatterns, patternChecks } from './patterns'

describe('worked examples', () => {
  for (const example of allExamples) {
    const checks = [calculationChecks[example.id], patternChecks[example.id]].filter(check => check !== undefined)
    for (const check of checks) it(`${example.id} ${example.condition} (${example.source.citation}; ${restsOn(example)})`, () => check(example))
  }

  it('every entry has a check, or is named as waiting for the criteria, never both', () => {
    const without = allExamples.map(one => one.id).filter(id => !calculationChecks[id] && !patternChecks[id])
    expect(without, 'give the entry a check in calculations.ts or patterns.ts').toEqual([...awaitingPatterns])
  })
  it('every check belongs to an entry', () => {
    const ids = new Set(allExamples.map(one => one.id))
    expect([...Object.keys(calculationChecks), ...Object.keys(patternChecks)].filter(id => !ids.has(id))).toEqual([])
  })

  it('prints what each check rests on', () => {
    const groups = new Map<string, string[]>()
    for (const example of allExamples) {
      const said = awaitingPatterns.includes(example.id) ? `${restsOn(example)}, no check yet` : restsOn(example)
      groups.set(said, [...groups.get(said) ?? [], `${example.id} ${example.source.citation}`])
    }
    console.info([...groups].map(([said, entries]) => `${said}:\n  ${entries.join('\n  ')}`).join('\n'))
    expect([...groups.values()].flat()).toHaveLength(allExamples.length)
    expect(allExamples.filter(one => one.kind !== 'rule-vector' && one.basis !== 'read'), 'an entry from memory must be said to be so').toEqual([])
  })
})
