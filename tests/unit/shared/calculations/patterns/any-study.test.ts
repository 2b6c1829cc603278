import * as fc from 'fast-check'
import { expect, it, vi } from 'vitest'
import { assessStudy } from '#shared/calculations/assess-study'
import { patternSets } from '#shared/calculations/patterns'
import { defaultPolicy, type PatternResult, type Policy } from '#shared/calculations/types'
import type { Side } from '#shared/schemas/common'
import type { Study } from '#shared/schemas/study'
import { referenceTables } from '#reference-tables'
import { arbitraryStudy } from '../arbitrary-study'

vi.setConfig({ testTimeout: 60_000 })
const seeded = { seed: 20261203, numRuns: 100 }
const everything: Policy = {
  ...defaultPolicy,
  patternsOn: patternSets.map(({ id }) => id),
  adopted: referenceTables.map(({ id, version }) => ({ setId: id, version, adoptedOn: '', adoptedBy: '', verifiedRows: [] })),
}
const patternsOf = (study: Study, policy = everything): PatternResult[] => assessStudy(study, referenceTables, policy).patterns

it('on any study every set answers in words and numbers that JSON gives back', () => {
  fc.assert(fc.property(arbitraryStudy({ wild: true }), fc.boolean(), (study, leaveOutEntrapmentSites) => {
    const patterns = patternsOf(study, { ...everything, leaveOutEntrapmentSites })
    const text = JSON.stringify(patterns)
    expect(text).not.toMatch(/NaN|Infinity|undefined|null|\[object/)
    expect(JSON.parse(text)).toStrictEqual(patterns)
    const runIds = new Set(study.runs.map(run => run.id))
    for (const { criteria, outcome, runIds: used } of patterns) {
      expect(outcome.label).not.toBe('')
      expect(new Set(criteria.map(({ id }) => id)).size).toBe(criteria.length)
      expect(used.every(id => runIds.has(id))).toBe(true)
      expect(used.length).toBeGreaterThan(0)
      for (const one of criteria) expect(one.result === 'not-assessable' ? one.because : 'known', JSON.stringify(one)).toBeTruthy()
    }
  }), seeded)
})

const swap = (side: Side): Side => side === 'right' ? 'left' : 'right'

it('swapping the sides mirrors the results that belong to a side', () => {
  fc.assert(fc.property(arbitraryStudy({ wild: false }), (study) => {
    const mirrored: Study = {
      ...study,
      runs: study.runs.map(run => ({ ...run, side: swap(run.side) })),
      temperatures: study.temperatures.map(reading => ({ ...reading, side: swap(reading.side) })),
    }
    const said = (patterns: readonly PatternResult[], turn: (side: Side) => Side) => patterns
      .map(({ id, side, outcome, criteria }) => `${id}/${side ? turn(side) : ''} ${outcome.met} ${criteria.map(one => `${one.id} ${one.result}`).join()}`).sort()
    expect(said(patternsOf(mirrored), swap)).toEqual(said(patternsOf(study), side => side))
  }), seeded)
})

it('the order of the runs does not matter', () => {
  fc.assert(fc.property(arbitraryStudy({ wild: false }), (study) => {
    const said = (patterns: readonly PatternResult[]) => patterns.map(({ id, side, outcome, criteria }) => `${id} ${side} ${outcome.label} ${JSON.stringify(criteria)}`)
    const turned = (text: string) => text.replace(/outside: [^"]*/g, 'outside')
    expect(said(patternsOf({ ...study, runs: [...study.runs].reverse() })).map(turned)).toEqual(said(patternsOf(study)).map(turned))
  }), seeded)
})

it('without any limit nothing that rests on limits is met', () => {
  const onLimits = ['padua-1997', 'blink-pattern', 'length-dependent-2005', 'mmn-efns-pns-2010']
  fc.assert(fc.property(arbitraryStudy({ wild: false }), (study) => {
    const met = patternsOf(study, { ...everything, adopted: [] }).filter(({ id, outcome, criteria }) => onLimits.includes(id) && outcome.met === 'met' && !criteria.some(one => one.id === 'extreme' && one.result === 'met'))
    for (const { id, criteria } of met) expect(criteria.filter(one => one.result === 'met').every(one => /no response|no motor response/.test(one.numbers)), id).toBe(true)
  }), seeded)
})
