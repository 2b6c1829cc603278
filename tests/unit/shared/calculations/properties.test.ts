import * as fc from 'fast-check'
import { describe, expect, it, vi } from 'vitest'
import { assessStudy } from '#shared/calculations/assess-study'
import { conductionVelocity } from '#shared/calculations/conduction-velocity'
import { judge, notCold } from '#shared/calculations/judge'
import { roundForPrint } from '#shared/calculations/round-for-print'
import { sensoryVelocity } from '#shared/calculations/sensory-velocity'
import { defaultPolicy, type AppliedLimit, type Assessment, type Policy, type Result } from '#shared/calculations/types'
import { techniques } from '#shared/catalogue/nerves'
import type { Side } from '#shared/schemas/common'
import type { Study } from '#shared/schemas/study'
import { referenceTables } from '#reference-tables'
import { arbitraryStudy } from './arbitrary-study'

const seeded = { seed: 20261202, numRuns: 150 }
/** Wild studies are large. */
const fewer = { seed: 20261202, numRuns: 100 }
vi.setConfig({ testTimeout: 60_000 })
const everything: Policy = {
  ...defaultPolicy, temperatureCorrection: true,
  adopted: referenceTables.map(({ id, version }) => ({ setId: id, version, adoptedOn: '', adoptedBy: '', verifiedRows: [] })),
}
const assess = (study: Study) => assessStudy(study, referenceTables, everything)
const resultsOf = (assessment: Assessment): Result[] => [...assessment.runs, ...assessment.comparisons].flatMap(one => one.results)

function numbersIn(value: unknown, path: string, found: [string, number][] = []): [string, number][] {
  if (typeof value === 'number') found.push([path, value])
  else if (typeof value === 'object' && value !== null) for (const [key, inner] of Object.entries(value)) numbersIn(inner, `${path}.${key}`, found)
  return found
}

describe('on any study that the schema accepts', () => {
  it('nothing fails, no number is NaN or infinite, no text says so, and JSON gives it back', () => {
    fc.assert(fc.property(arbitraryStudy({ wild: true }), (study) => {
      const assessment = assess(study)
      expect(numbersIn(assessment, '').filter(([, value]) => !Number.isFinite(value))).toEqual([])
      const text = JSON.stringify(assessment)
      expect(text).not.toMatch(/NaN|Infinity|undefined|\[object/)
      expect(JSON.parse(text)).toStrictEqual(assessment)
      expect(new Set(assessment.remarks.map(remark => remark.key)).size).toBe(assessment.remarks.length)
    }), fewer)
  })

  it('no draft sentence and no remark uses the word block', () => {
    fc.assert(fc.property(arbitraryStudy({ wild: true }), (study) => {
      const { findings, remarks } = assess(study)
      for (const text of [...findings.map(one => one.text), ...remarks.map(one => one.sentence)]) expect(text).not.toMatch(/\bblock/i)
    }), fewer)
  })

  it('the study is not changed', () => {
    fc.assert(fc.property(arbitraryStudy({ wild: true }), (study) => {
      const before = structuredClone(study)
      assess(study)
      expect(study).toStrictEqual(before)
    }), fewer)
  })
})

it('velocity scales with distance', () => {
  fc.assert(fc.property(fc.integer({ min: 10, max: 900 }), fc.integer({ min: 30, max: 2000 }), fc.integer({ min: 1, max: 2000 }), fc.integer({ min: 2, max: 9 }), (distanceMm, distal, time, factor) => {
    const velocity = (mm: number) => {
      const out = conductionVelocity({ distanceMm: mm, proximalLatencyMs: (distal + time) / 100, distalLatencyMs: distal / 100 })
      return out.kind === 'value' ? out.value : Number.NaN
    }
    expect(velocity(distanceMm * factor) / velocity(distanceMm)).toBeCloseTo(factor, 9)
    const sensory = (mm: number) => {
      const out = sensoryVelocity({ distanceMm: mm, onsetLatencyMs: distal / 100 })
      return out.kind === 'value' ? out.value : Number.NaN
    }
    expect(sensory(distanceMm * factor) / sensory(distanceMm)).toBeCloseTo(factor, 9)
  }), seeded)
})

const swap = (side: Side): Side => side === 'right' ? 'left' : 'right'
const swapText = (text: string) => text.replace(/RIGHT|LEFT|\bright\b|\bleft\b/g, word => ({ RIGHT: 'LEFT', LEFT: 'RIGHT', right: 'left', left: 'right' })[word] as string)

it('swapping the sides mirrors the assessment', () => {
  fc.assert(fc.property(arbitraryStudy({ wild: false }), (study) => {
    const mirrored: Study = {
      ...study,
      runs: study.runs.map(run => ({ ...run, side: swap(run.side) })),
      temperatures: study.temperatures.map(reading => ({ ...reading, side: swap(reading.side) })),
      referralSide: study.referralSide === 'right' || study.referralSide === 'left' ? swap(study.referralSide) : study.referralSide,
    }
    const [here, there] = [assess(study), assess(mirrored)]
    const said = (assessment: Assessment, turn: (text: string) => string) => resultsOf(assessment).filter(result => !result.key.startsWith('compare/both'))
      .map(({ key, print, verdict, flagged, side }) => turn(JSON.stringify({ key: key.replace('compare/right', 'compare/RIGHT').replace('compare/left', 'compare/LEFT'), print, verdict, flagged, side }))).sort()
    expect(said(there, swapText)).toEqual(said(here, text => text))
    // Differences between the sides have no side: number and verdict stay.
    const both = (assessment: Assessment) => resultsOf(assessment).filter(result => result.key.startsWith('compare/both')).map(({ key, value, flagged }) => ({ key, value, flagged }))
    expect(both(there)).toEqual(both(here))
  }), seeded)
})

it('adding an absent run never makes anything normal', () => {
  const motorOrSensory = techniques.filter(({ kind }) => kind === 'motor' || kind === 'sensory' || kind === 'mixed' || kind === 'f-wave')
  fc.assert(fc.property(arbitraryStudy({ wild: false }), fc.constantFrom(...motorOrSensory), fc.constantFrom('right' as const, 'left' as const), (study, technique, side) => {
    const silent = technique.sites.map((site, index) => ({
      id: `silent-${index}`, site: site.id,
      values: Object.fromEntries(technique.quantities.filter(id => !['distanceMm', 'stimulusMa'].includes(id)).map(id => [id, 'no-response' as const])),
    }))
    const before = assess(study)
    const after = assess({ ...study, runs: [...study.runs, { id: 'zz-silent', technique: technique.id, side, rows: silent }] })
    const within = (assessment: Assessment) => new Set(resultsOf(assessment).filter(result => result.verdict.kind === 'within').map(result => result.key))
    const known = within(before)
    expect([...within(after)].filter(key => !known.has(key))).toEqual([])
    const own = after.runs.find(run => run.runId === 'zz-silent')?.results ?? []
    expect(own.every(result => result.value.kind !== 'value')).toBe(true)
    // What was flagged in a run stays flagged.
    const stillFlagged = new Set(after.flagged)
    expect(before.flagged.filter(key => !key.startsWith('compare/') && !stillFlagged.has(key))).toEqual([])
  }), seeded)
})

it('a value exactly on a limit is within, and a hair beyond it is not', () => {
  const limitOf = (bound: 'upper' | 'lower', value: number): AppliedLimit =>
    ({ bound, value, unit: 'ms', setId: 'invented', setVersion: 1, setTitle: 'Invented', rowId: 'r', subgroup: '', definition: '', percentile: 97, basis: 'read', verified: false })
  fc.assert(fc.property(fc.integer({ min: 1, max: 9999 }), fc.constantFrom('upper' as const, 'lower' as const), (hundredths, bound) => {
    const value = hundredths / 100
    const limit = limitOf(bound, value)
    const kindAt = (at: number) => judge({ kind: 'value', value: at, uncertainty: 0.1 }, { kind: 'limits', [bound]: limit }, 'lengthens', notCold)
    expect(kindAt(value)).toEqual({ kind: 'within', limits: [limit], nearLimit: true })
    const beyond = bound === 'upper' ? value + 0.01 : value - 0.01
    expect(kindAt(beyond)).toEqual({ kind: 'outside', direction: bound === 'upper' ? 'above' : 'below', limit, limits: [limit], nearLimit: true })
  }), seeded)
})

it('the order of the runs changes nothing but their order', () => {
  const withShuffle = arbitraryStudy({ wild: false }).chain(study => fc.tuple(fc.constant(study), fc.shuffledSubarray(study.runs, { minLength: study.runs.length })))
  const sorted = <T>(list: readonly T[], keyOf: (one: T) => string) => [...list].sort((a, b) => keyOf(a) < keyOf(b) ? -1 : 1)
  fc.assert(fc.property(withShuffle, ([study, runs]) => {
    const canonical = (assessment: Assessment) => ({
      ...assessment,
      runs: sorted(assessment.runs, run => run.runId), remarks: sorted(assessment.remarks, remark => remark.key), findings: sorted(assessment.findings, one => one.key),
      flagged: [...assessment.flagged].sort(),
    })
    expect(canonical(assess({ ...study, runs }))).toEqual(canonical(assess(study)))
  }), seeded)
})

it('a printed number is within half a unit of its last decimal', () => {
  fc.assert(fc.property(fc.double({ min: -1e6, max: 1e6, noNaN: true }), fc.integer({ min: 0, max: 3 }), (value, decimals) => {
    expect(Math.abs(Number(roundForPrint(value, decimals)) - value)).toBeLessThanOrEqual(0.5 * 10 ** -decimals * (1 + 1e-9) + 1e-9)
  }), { ...seeded, numRuns: 2000 })
})
