import { describe, expect, it } from 'vitest'
import type { Technique } from '../../../../shared/catalogue/types'
import type { RunAssessment, Verdict } from '../../../../shared/calculations/types'
import type { Run } from '../../../../shared/schemas/study'
import { axisTicks } from '../../../../shared/plots/axis-ticks'
import { printColours } from '../../../../shared/plots/tokens'
import { travelPlotGeometry } from '../../../../shared/plots/travel-plot'
import { travelPlotSvg } from '../../../../shared/plots/travel-plot-svg'
import { travelPlotText } from '../../../../shared/plots/travel-plot-text'
import { limit, outside, result, within } from './results'

const technique: Technique = {
  id: 'ulnar-motor-adm', kind: 'motor', nerve: 'ulnar', label: 'ulnar motor', recording: { id: 'adm', label: 'abductor digiti minimi', short: 'ADM' }, limb: 'arm', roots: 'C8 T1',
  sites: [{ id: 'wrist', label: 'wrist' }, { id: 'below-elbow', label: 'below elbow' }, { id: 'above-elbow', label: 'above elbow' }],
  quantities: ['latencyMs', 'amplitudeMv', 'distanceMm'],
}
type Cell = number | 'no-response' | undefined
function makeRun(cells: [Cell, Cell][], side: 'right' | 'left' = 'right'): Run {
  return { id: 'run', technique: technique.id, side, rows: cells.map(([latencyMs, distanceMm], index) => ({ id: `row${index}`, site: technique.sites[index]!.id, values: { latencyMs, distanceMm } })) }
}
function judged(verdicts: { row: string, velocity: number, verdict: Verdict }[]): RunAssessment {
  return { runId: 'run', technique: technique.id, side: 'right', title: 'RIGHT ulnar motor', cold: { state: 'warm', celsius: 32.6, thresholdC: 32, because: '' }, results: verdicts.map(({ row, velocity, verdict }) => ({ ...result('velocityMps', 'm/s', velocity, verdict, 3), rowId: row })) }
}
const healthy = makeRun([[2.9, 80], [6.4, 205], [8.1, 100]])
const healthyJudged = judged([{ row: 'row1', velocity: 59, verdict: within([limit('lower', 52, 'm/s')]) }, { row: 'row2', velocity: 59, verdict: within([limit('lower', 43, 'm/s')]) }])

it('places sites by distance upward and time to the right', () => {
  const plot = travelPlotGeometry(healthy, healthyJudged, technique)!
  expect(plot.points.map(point => point.mm)).toEqual([0, 205, 305])
  expect(plot.points[0]!.y).toBe(plot.area.bottom)
  expect(plot.points[2]!.y).toBeLessThan(plot.points[1]!.y)
  expect(plot.points[2]!.x).toBeGreaterThan(plot.points[1]!.x)
  expect(plot.segments.map(segment => segment.words)).toEqual(['59 m/s', '59 m/s'])
})

describe('a velocity on its limit runs along the edge of the shade; slower leaves it', () => {
  it.each([{ velocity: 50, inside: true }, { velocity: 60, inside: true }, { velocity: 45, inside: false }])('$velocity against 50 m/s', ({ velocity, inside }) => {
    const run = makeRun([[3, 80], [3 + 200 / velocity, 200]])
    const verdict = inside ? within([limit('lower', 50, 'm/s')]) : outside('below', limit('lower', 50, 'm/s'))
    const plot = travelPlotGeometry(run, judged([{ row: 'row1', velocity, verdict }]), technique)!
    const edge = Number(plot.wedges[0]!.path.match(/L([\d.]+) [\d.]+Z$/)![1])
    expect(plot.points[1]!.x <= edge + 0.02).toBe(inside)
    expect(plot.segments[0]!.tone).toBe(inside ? 'ink' : 'beyond')
  })
})

describe('what cannot be placed is said, and nothing is drawn across it', () => {
  const table: { name: string, cells: [Cell, Cell][], placed: number, segments: number, unplaced: string[] }[] = [
    { name: 'no response at one site', cells: [[2.9, 80], ['no-response', 205], [8.1, 100]], placed: 2, segments: 0, unplaced: ['below elbow: no response'] },
    { name: 'distance missing', cells: [[2.9, 80], [6.4, undefined], [8.1, 100]], placed: 1, segments: 0, unplaced: ['below elbow: distance missing', 'above elbow: distance missing'] },
    { name: 'latency missing at the end', cells: [[2.9, 80], [6.4, 205], [undefined, 100]], placed: 2, segments: 1, unplaced: ['above elbow: latency missing'] },
  ]
  it.each(table)('$name', ({ cells, placed, segments, unplaced }) => {
    const plot = travelPlotGeometry(makeRun(cells), undefined, technique)!
    expect(plot.points).toHaveLength(placed)
    expect(plot.segments).toHaveLength(segments)
    expect(plot.unplaced).toEqual(unplaced)
  })
  it('nothing typed: no plot', () => expect(travelPlotGeometry(makeRun([[undefined, undefined]]), undefined, technique)).toBeNull())
  it('a sensory run has no plot', () => expect(travelPlotGeometry(healthy, undefined, { ...technique, kind: 'sensory' })).toBeNull())
})

it('the other side is drawn behind it and both fit', () => {
  const plot = travelPlotGeometry(healthy, healthyJudged, technique, { run: makeRun([[3.2, 80], [16, 210], [22, 100]], 'left') })!
  expect(plot.otherSide).toBe('LEFT')
  for (const x of plot.otherPath.match(/[ML]([\d.]+)/g)!.map(part => Number(part.slice(1)))) expect(x).toBeLessThanOrEqual(plot.area.right)
})

it('a label that would not fit stands left of its point', () => {
  const plot = travelPlotGeometry(healthy, healthyJudged, technique)!
  for (const point of plot.points) {
    const width = point.label.length * 7
    const [from, to] = point.label && point.anchor === 'end' ? [point.x - 9 - width, point.x - 9] : [point.x + 9, point.x + 9 + width]
    expect(from).toBeGreaterThan(0)
    expect(to).toBeLessThan(plot.width)
  }
})

it('names that would touch stand apart, and none leaves the drawing', () => {
  const close = makeRun([[10, 80], [13.4, 20], [14, 20]])
  const long = { ...technique, sites: technique.sites.map(site => ({ ...site, label: `${site.label} of the arm (once more)` })) }
  for (const width of [160, 230, 296]) {
    const { points } = travelPlotGeometry(close, undefined, long, undefined, { width, height: 164 })!
    expect(points.every(point => !point.label.includes('('))).toBe(true)
    expect(points.map(point => point.name)).toEqual(long.sites.map(site => site.label))
    for (const side of ['start', 'end']) {
      const feet = points.filter(point => point.anchor === side).map(point => point.labelY).sort((a, b) => a - b)
      for (const [index, foot] of feet.entries()) if (index > 0) expect(foot - feet[index - 1]!).toBeGreaterThanOrEqual(12)
    }
    for (const point of points.filter(each => each.isNamed && each.anchor === 'end')) expect(point.labelX - point.label.length * 6.6).toBeGreaterThanOrEqual(0)
  }
})

it('in words: every site, every velocity with its limit, what is missing, the other side', () => {
  const plot = travelPlotGeometry(healthy, healthyJudged, technique, { run: makeRun([[3.2, 80], [6.6, 210], [8, 100]], 'left') })!
  expect(travelPlotText('RIGHT ulnar motor', plot, healthyJudged)).toBe('RIGHT ulnar motor: wrist at 0 mm, 2.9 ms; below elbow at 205 mm, 6.4 ms: 59 ± 3 m/s, within the lower limit 52 m/s; above elbow at 305 mm, 8.1 ms: 59 ± 3 m/s, within the lower limit 43 m/s. The LEFT side is drawn dashed.')
})

it('as SVG text: the shipped font, given colours, labels escaped, never NaN', () => {
  const odd = { ...technique, sites: technique.sites.map(site => ({ ...site, label: `${site.label} <&>` })) }
  const svg = travelPlotSvg(travelPlotGeometry(healthy, healthyJudged, odd)!, printColours)
  expect(svg).toContain('font-family="IBM Plex Sans"')
  expect(svg).toContain('below elbow &lt;&amp;&gt;')
  expect(svg).not.toMatch(/NaN|undefined|Infinity|var\(/)
})

it.each([
  { largest: 9.2, max: 10, count: 6 }, { largest: 305, max: 400, count: 5 }, { largest: 12, max: 12, count: 7 }, { largest: 12.1, max: 15, count: 4 }, { largest: 100, max: 100, count: 6 },
])('ticks up to $largest', ({ largest, max, count }) => {
  const ticks = axisTicks(largest)
  expect(ticks.max).toBeCloseTo(max)
  expect(ticks.values).toHaveLength(count)
})
