import type { Technique } from '../catalogue/types'
import type { Result, RunAssessment } from '../calculations/types'
import type { Run, RunRow } from '../schemas/study'
import { axisTicks, type Tick } from './axis-ticks'
import type { Tone } from './tokens'
import { limitsOf, toneOf } from './verdict-words'

export interface TravelPoint { rowId: string, site: string, label: string, /** the site in full */ name: string, /** its label starts or ends beside it */ anchor: 'start' | 'end', /** where its label starts or ends, and its foot stands */ labelX: number, labelY: number, /** the axis names the first site already: it is left out where it has no room */ isNamed: boolean, x: number, y: number, ms: number, mm: number }
export interface TravelSegment {
  rowId: string
  from: { x: number, y: number }
  to: { x: number, y: number }
  tone: Tone
  /** "59 m/s"; where it stands, and whether its text ends or starts there. */
  words: string
  label: { x: number, y: number, anchor: 'start' | 'end' }
}
/** The slopes a segment's limit allows, as a closed path. */
export interface TravelWedge { rowId: string, path: string }

export interface TravelPlotGeometry {
  width: number
  height: number
  /** The drawing area. */
  area: { left: number, right: number, top: number, bottom: number }
  points: TravelPoint[]
  segments: TravelSegment[]
  wedges: TravelWedge[]
  /** The other side's line, dashed; '' without one. */
  otherPath: string
  otherSide: string
  timeTicks: Tick[]
  distanceTicks: (Tick & { /** a long name of a site stands where its number would */ isCovered: boolean })[]
  origin: string
  /** What could not be placed: "elbow: no response". */
  unplaced: string[]
  struck: boolean
}

interface Placed { row: RunRow, ms: number, mm: number }

/** The path of one side's run that can be drawn; the other side's stands behind it. */
export interface OtherSide { run: Run }

/** A stimulus to another nerve has no place on this one's line. */
function alongTheNerve(run: Run, technique: Technique): Run {
  const beside = new Set(technique.sites.filter(site => site.aside).map(site => site.id))
  return { ...run, rows: run.rows.filter(row => !beside.has(row.site)) }
}

/** Rows with a latency, at their distance along the limb. A missing distance ends the chain: what lies beyond has no place. */
function placeRows(run: Run): Placed[] {
  const placed: Placed[] = []
  let mm: number | null = 0
  for (const [index, row] of run.rows.entries()) {
    const step: unknown = index === 0 ? 0 : row.values.distanceMm
    mm = mm !== null && typeof step === 'number' ? mm + step : null
    const ms = row.values.latencyMs
    if (mm !== null && typeof ms === 'number') placed.push({ row, ms, mm })
  }
  return placed
}

const labelOf = (technique: Technique, siteId: string) => technique.sites.find(site => site.id === siteId)?.label ?? siteId
/** Beside a point there is little room: what stands in brackets is left to the table, long first words are cut short. */
const cutShort: readonly (readonly [RegExp, string])[] = [[/ \(.*\)$/, ''], [/^unterhalb /, 'unt. '], [/^oberhalb /, 'ob. ']]
const shortLabel = (technique: Technique, siteId: string) => cutShort.reduce((label, [long, short]) => label.replace(long, short), labelOf(technique, siteId))

function unplacedRows(run: Run, technique: Technique, placed: Placed[]): string[] {
  return run.rows.filter(row => !placed.some(point => point.row.id === row.id)).map((row) => {
    const latency = row.values.latencyMs
    const because = typeof latency === 'string' ? latency.replace('-', ' ') : latency === undefined ? 'latency missing' : 'distance missing'
    return `${labelOf(technique, row.site)}: ${because}`
  })
}

const velocityOf = (assessment: RunAssessment | undefined, rowId: string): Result | undefined =>
  assessment?.results.find(result => result.rowId === rowId && result.quantity === 'velocityMps')

interface Frame { x: (ms: number) => number, y: (mm: number) => number, maxMs: number }

/** m/s is mm/ms: a limit of 51 m/s lets 51 mm take 1 ms at most. */
function wedgeOf(from: Placed, to: Placed, velocity: Result, { x, y, maxMs }: Frame): TravelWedge | null {
  const limits = limitsOf(velocity.verdict)
  const lower = limits.find(limit => limit.bound === 'lower')?.value
  const upper = limits.find(limit => limit.bound === 'upper')?.value
  const length = to.mm - from.mm
  if (limits.length === 0 || length <= 0 || (lower !== undefined && lower <= 0)) return null
  const earliest = upper ? from.ms + length / upper : from.ms
  const latest = lower ? from.ms + length / lower : maxMs
  const points = [[from.ms, from.mm], [earliest, to.mm], [Math.min(latest, maxMs), to.mm]] as const
  const clipped = latest > maxMs ? [[maxMs, from.mm + (maxMs - from.ms) * (lower ?? 0)] as const] : []
  return { rowId: to.row.id, path: `M${[...points, ...clipped].map(([ms, mm]) => `${x(ms)} ${y(mm)}`).join('L')}Z` }
}

/** About 6.6 pixels a letter at size 12: enough to know whether a label still fits. */
const letterWidth = 6.6
/**
 * Sites are named left of their point, above the line, and velocities right of it, below: neither stands in the other's
 * way. A name that does not fit there stands right.
 */
function anchorOf({ ms, mm }: Placed, label: string, { x }: Frame, width: number): 'start' | 'end' {
  const needs = 9 + label.length * letterWidth
  return x(ms) - needs >= (mm === 0 ? x(0) : 0) || x(ms) + needs > width ? 'end' : 'start'
}

function pointOf(point: Placed, technique: Technique, frame: Frame, width: number): TravelPoint {
  const { row, ms, mm } = point
  const [at, y] = [frame.x(ms), frame.y(mm)]
  const label = shortLabel(technique, row.site)
  const anchor = anchorOf(point, label, frame, width)
  // Inside the drawing in any case: a name across the line can be read, one cut off cannot.
  const labelX = anchor === 'end' ? Math.max(at - 9, label.length * letterWidth + 2) : at + 9
  return { rowId: row.id, site: row.site, label, name: labelOf(technique, row.site), anchor, labelX, isNamed: mm > 0 || anchor === 'end', labelY: mm === 0 ? y - 5 : y - 2, x: at, y, ms, mm }
}

/** Letters of size 12 need this from foot to foot. */
const lineStep = 12
/** Does the name of a site reach into the numbers of the axis at this height? */
const covers = ({ anchor, labelX, labelY, label }: TravelPoint, at: number, left: number) => anchor === 'end' && labelX - label.length * letterWidth < left && Math.abs(labelY - at) < lineStep

/** Labels on the same side that would touch move upward, from the lowest on. */
function apart<Label>(labels: readonly Label[], sideOf: (label: Label) => string, footOf: (label: Label) => number, moved: (label: Label, foot: number) => Label): Label[] {
  const lowest: Record<string, number> = {}
  return labels.map((label) => {
    const foot = Math.min(footOf(label), (lowest[sideOf(label)] ?? Number.POSITIVE_INFINITY) - lineStep)
    lowest[sideOf(label)] = foot
    return moved(label, foot)
  })
}

function segmentOf(from: Placed, to: Placed, velocity: Result | undefined, { x, y }: Frame, siteAnchor: 'start' | 'end'): TravelSegment {
  const start = { x: x(from.ms), y: y(from.mm) }
  const end = { x: x(to.ms), y: y(to.mm) }
  /** A short segment has no room for its velocity on the side where the sites are named. */
  const left = start.y - end.y < 34 && siteAnchor === 'start'
  return {
    rowId: to.row.id,
    from: start,
    to: end,
    tone: velocity ? toneOf(velocity) : 'ink',
    words: velocity?.value.kind === 'value' ? `${velocity.print} m/s` : '',
    label: { x: (start.x + end.x) / 2 + (left ? -9 : 10), y: (start.y + end.y) / 2 + 5, anchor: left ? 'end' : 'start' },
  }
}

/** Neighbouring rows that both have a place; across a missing one nothing is drawn, as nothing was computed. */
function neighbours(run: Run, placed: Placed[]): [Placed, Placed][] {
  return placed.slice(1).flatMap((to, index) => {
    const from = placed[index] as Placed
    return run.rows.indexOf(to.row) - run.rows.indexOf(from.row) === 1 ? [[from, to] as [Placed, Placed]] : []
  })
}

function frameOf(placed: Placed[], others: Placed[], width: number, height: number) {
  const area = { left: 36, right: width - 10, top: 24, bottom: height - 26 }
  const all = [...placed, ...others]
  const time = axisTicks(Math.max(...all.map(point => point.ms)) * 1.15)
  const distance = axisTicks(Math.max(100, ...all.map(point => point.mm)))
  const round = (value: number) => Math.round(value * 100) / 100
  const x = (ms: number) => round(area.left + ms / time.max * (area.right - area.left))
  const y = (mm: number) => round(area.bottom - mm / distance.max * (area.bottom - area.top))
  return { area, x, y, maxMs: time.max, timeTicks: time.values.map(v => ({ value: v, at: x(v) })), distanceTicks: distance.values.map(v => ({ value: v, at: y(v) })) }
}

/**
 * Distance along the limb upward, time to the right: one point per stimulation site, the slope between two is the velocity.
 * Null when no site can be placed, and for techniques that are not stimulated at a series of sites.
 *
 * @param other the same technique on the other side, drawn dashed behind it
 * @example travelPlotGeometry(run, runAssessment, technique)?.segments[0]?.words // => '59 m/s'
 */
export function travelPlotGeometry(recorded: Run, assessment: RunAssessment | undefined, technique: Technique, other?: OtherSide, { width = 296, height = 210 } = {}): TravelPlotGeometry | null {
  if (technique.kind !== 'motor') return null
  const run = alongTheNerve(recorded, technique)
  const placed = placeRows(run)
  const others = other ? placeRows(alongTheNerve(other.run, technique)) : []
  if (placed.length === 0) return null
  const { area, timeTicks, distanceTicks, ...frame } = frameOf(placed, others, width, height)
  const pairs = neighbours(run, placed)
  const points = apart(placed.map(point => pointOf(point, technique, frame, width)), point => point.anchor, point => point.labelY, (point, labelY) => ({ ...point, labelY }))
  return {
    width, height, area, timeTicks, points,
    distanceTicks: distanceTicks.map(tick => ({ ...tick, isCovered: points.some(point => covers(point, tick.at, area.left)) })),
    segments: apart(pairs.map(([from, to]) => segmentOf(from, to, velocityOf(assessment, to.row.id), frame, anchorOf(to, shortLabel(technique, to.row.site), frame, width))), segment => segment.label.anchor, segment => segment.label.y, (segment, y) => ({ ...segment, label: { ...segment.label, y } })),
    wedges: pairs.flatMap(([from, to]) => {
      const velocity = velocityOf(assessment, to.row.id)
      return velocity ? wedgeOf(from, to, velocity, frame) ?? [] : []
    }),
    otherPath: others.length > 1 ? `M${others.map(point => `${frame.x(point.ms)} ${frame.y(point.mm)}`).join('L')}` : '',
    otherSide: other && others.length > 1 ? other.run.side.toUpperCase() : '',
    origin: labelOf(technique, (run.rows[0] as RunRow).site),
    unplaced: unplacedRows(run, technique, placed),
    struck: Boolean(assessment?.supersededBy),
  }
}
