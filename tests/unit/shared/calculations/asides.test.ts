import { describe, expect, it } from 'vitest'
import { techniqueOf } from '#shared/catalogue/nerves'
import { travelPlotGeometry } from '#shared/plots/travel-plot'
import type { RunRow } from '#shared/schemas/study'
import { assess, codes, remarkOf, resultOf, run, studyWith } from './study-maker'

type Row = [string, RunRow['values']]
const line: Row[] = [['wrist', { latencyMs: 2.9, amplitudeMv: 9.6, distanceMm: 80 }], ['below-elbow', { latencyMs: 6.4, amplitudeMv: 6.5, distanceMm: 205 }], ['above-elbow', { latencyMs: 8.1, amplitudeMv: 6.4, distanceMm: 100 }]]
const crossing: Row = ['median-elbow', { latencyMs: 6.1, amplitudeMv: 3.1 }]
const without = assess(studyWith([run('ulnar-motor-adm', 'right', line)]))
const beside = assess(studyWith([run('ulnar-motor-adm', 'right', [...line, crossing])]))

describe('the median nerve at the elbow, recorded from the ulnar muscle', () => {
  it('is what a fall without slowing asks for, as a row that can be added', () => {
    expect(remarkOf(without, 'martin-gruber')).toMatchObject({ strength: 'check', suggestion: { addTechnique: 'ulnar-motor-adm', addSite: 'median-elbow', side: 'right' } })
  })
  it('once recorded, the question becomes a note with its size', () => {
    expect(remarkOf(beside, 'martin-gruber')).toMatchObject({ strength: 'note', sentence: expect.stringContaining('median nerve at the elbow 3.1 mV') })
  })
  it('makes no segment, no order and no flag, and changes no result of the nerve itself', () => {
    const before = without.runs[0]!.results
    expect(beside.runs[0]!.results.slice(0, before.length)).toEqual(before)
    expect(beside.runs[0]!.results.slice(before.length).map(result => [result.quantity, result.at, result.verdict.kind])).toEqual([['latencyMs', 'median-elbow', 'none'], ['amplitudeMv', 'median-elbow', 'none']])
    expect(codes(beside).filter(code => code.startsWith('stop'))).toEqual([])
    expect(beside.flagged).toEqual(without.flagged)
  })
  it('is told in the draft with its size', () => {
    expect(beside.findings[0]!.text).toContain('amplitude median nerve at the elbow 3.1 mV')
  })
  it('is not drawn on the line of the ulnar nerve', () => {
    const recorded = run('ulnar-motor-adm', 'right', [...line, crossing])
    const plot = travelPlotGeometry(recorded, beside.runs[0], techniqueOf('ulnar-motor-adm')!)!
    expect(plot.points.map(point => point.site)).toEqual(['wrist', 'below-elbow', 'above-elbow'])
    expect(plot.unplaced).toEqual([])
  })
})

it.each([
  ['fibular-motor-edb', [['ankle', { latencyMs: 4.5, amplitudeMv: 3, distanceMm: 80 }], ['below-fibular-head', { latencyMs: 11, amplitudeMv: 4.5, distanceMm: 310 }]], 'lateral-malleolus'],
  ['median-motor-apb', [['wrist', { latencyMs: 3.5, amplitudeMv: 8, distanceMm: 80 }], ['elbow', { latencyMs: 7.5, amplitudeMv: 10, distanceMm: 215 }]], 'ulnar-wrist'],
] as [string, Row[], string][])('%s larger above than below offers %s', (technique, rows, site) => {
  expect(remarkOf(assess(studyWith([run(technique, 'right', rows)])), 'proximal-larger')?.suggestion).toMatchObject({ addTechnique: technique, addSite: site })
})

describe('short segments across the elbow', () => {
  const steps = [['elbow-minus-4', { latencyMs: 6.0, amplitudeMv: 9, distanceMm: 210 }], ['elbow-minus-2', { latencyMs: 6.4, amplitudeMv: 9, distanceMm: 20 }], ['elbow-0', { latencyMs: 7.4, amplitudeMv: 8.8, distanceMm: 20 }]] as Row[]
  const assessed = assess(studyWith([run('ulnar-motor-adm-short', 'right', steps, { id: 'r' })]))
  it('are declared by the technique, and told as steps', () => {
    expect(codes(assessed).filter(code => !code.startsWith('note'))).toEqual([])
    expect(resultOf(assessed, 'r/r-2/stepLatencyMs')).toMatchObject({ print: '1.00', label: 'latency step, medial epicondyle to 2 cm below the epicondyle' })
  })
})
