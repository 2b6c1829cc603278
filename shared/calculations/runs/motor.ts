import { numberOf, isNoResponse, absentBecause, notComputable, valueOf } from '../computed-value'
import { amplitudeRatio, fallPercent, risePercent } from '../change-between-sites'
import { conductionVelocity } from '../conduction-velocity'
import { quantityInfo } from '../quantity-info'
import { residualLatency, residualLatencyUncertainty } from '../residual-latency'
import { roundForPrint } from '../round-for-print'
import { terminalLatencyIndex } from '../terminal-latency-index'
import type { ComputedValue } from '../types'
import { velocityDrop, velocityDropPercent } from '../velocity-drop'
import { addCorrected } from './corrected'
import { add, addTyped, cellOf, questionFor, type PlacedRow, type RunMaker } from './run-maker'

const VELOCITY_SOURCE = 'Mallik and Weir, J Neurol Neurosurg Psychiatry 2005;76(Suppl 2):ii23-ii31; uncertainty by JCGM 100, k = 2'
const CHANGE_SOURCE = 'negative-peak measures, EFNS/PNS criteria (PMC8108415, table 2)'
const DROP_SOURCE = 'Buschbacher, Am J Phys Med Rehabil 1999;78(S):S9-S14'

/** A segment that could be computed: kept for the next one and for the indices of the distal part. */
interface Segment { velocityMps: number, distanceMm: number, timeMs: number }

/**
 * Results of a motor run: what was typed, and from it segment velocities, drops of velocity, falls of amplitude and area,
 * rises of duration, terminal latency index and residual latency.
 */
export function assessMotor(maker: RunMaker): void {
  const distalIndex = usualDistal(maker)
  const distances = distancesToElectrode(maker.rows)
  const distal = distances[distalIndex] ?? null
  let before: Segment | null = null
  for (const [index, placed] of maker.rows.entries()) {
    addTyped(maker, placed, {
      label: quantity => `${quantityInfo(quantity).label} at ${placed.label}`,
      at: placed.row.site,
      distanceMm: distances[index] ?? null,
      supporting: quantity => index !== distalIndex || quantity === 'durationMs' || quantity === 'areaMvMs',
    })
    const previous = maker.rows[index - 1]
    if (!previous || !isStarted(placed)) continue
    const segment = addVelocity(maker, previous, placed, distal)
    if (segment && before && placed.site?.segment?.entrapment) addDrop(maker, placed, before, segment, distal)
    addChanges(maker, previous, placed, index, distal)
    if (segment && index === distalIndex + 1) addDistalIndices(maker, maker.rows[distalIndex] as PlacedRow, segment, distal)
    before = segment
  }
}

/** The row that the distal limits are for: the first of the technique's usual sites. */
function usualDistal(maker: RunMaker): number {
  const usual = maker.technique.sites.find(site => site.usual)?.id
  return Math.max(0, maker.rows.findIndex(placed => placed.row.site === usual))
}

/** Distances from each site to the recording electrode: the typed ones added up. */
function distancesToElectrode(rows: readonly PlacedRow[]): (number | null)[] {
  let sum: number | null = 0
  return rows.map(({ row }) => {
    const typed = row.values.distanceMm
    sum = sum !== null && typeof typed === 'number' ? sum + typed : null
    return sum
  })
}

const isStarted = ({ row }: PlacedRow) => row.values.latencyMs !== undefined || row.values.amplitudeMv !== undefined

/** Segment id: the catalogue's where the two sites are neighbours there, otherwise both names. */
function segmentOf(previous: PlacedRow, placed: PlacedRow): { id: string, label: string } {
  const { segment } = placed.site ?? {}
  if (segment && previous.site && placed.place === previous.place + 1) {
    return { id: segment.id, label: segment.label.startsWith('across') ? ` ${segment.label}` : `, ${placed.label} to ${previous.label}` }
  }
  return { id: `${previous.row.site}-${placed.row.site}`, label: `, ${placed.label} to ${previous.label}` }
}

function addVelocity(maker: RunMaker, previous: PlacedRow, placed: PlacedRow, distal: number | null): Segment | null {
  const segment = segmentOf(previous, placed)
  const [near, far, along] = [cellOf(previous.row, 'latencyMs'), cellOf(placed.row, 'latencyMs'), cellOf(placed.row, 'distanceMm')]
  const value = near.kind === 'value' && far.kind === 'value' && along.kind === 'value'
    ? conductionVelocity({ distanceMm: along.value, proximalLatencyMs: far.value, distalLatencyMs: near.value }, maker.context.expanded)
    : notComputable(whyNot([[near, previous.label], [far, placed.label], [along, placed.label]]))
  add(maker, {
    rowId: placed.row.id, quantity: 'velocityMps', at: segment.id, label: `velocity${segment.label}`, typed: false, value,
    how: value.kind === 'value' ? { formula: `${numberOf(along)} mm / (${numberOf(far)} ms - ${numberOf(near)} ms)`, source: VELOCITY_SOURCE } : undefined,
    query: questionFor(maker, segment.id, distal),
  })
  if (value.kind !== 'value' || near.kind !== 'value' || far.kind !== 'value' || along.kind !== 'value') return null
  addCorrected(maker, placed, 'velocity', value.value)
  return { velocityMps: value.value, distanceMm: along.value, timeMs: far.value - near.value }
}

/** The first input that is missing or absent, in words. */
function whyNot(inputs: [ComputedValue, string][]): string {
  for (const [value, label] of inputs) {
    if (value.kind === 'absent') return `${absenceAt[value.absence]} at ${label}`
    if (value.kind === 'not-computable') return `${value.because} at ${label}`
  }
  return ''
}

const absenceAt = { 'no-response': 'no response', 'technical': 'not recordable', 'not-done': 'not done', 'stopped': 'stopped' } as const

function addDrop(maker: RunMaker, placed: PlacedRow, before: Segment, segment: Segment, distal: number | null): void {
  const at = placed.site?.segment
  if (!at) return
  const formula = `${roundForPrint(before.velocityMps, 1)} m/s against ${roundForPrint(segment.velocityMps, 1)} m/s`
  const common = { rowId: placed.row.id, at: at.id, typed: false, supporting: true, query: questionFor(maker, at.id, distal), how: { formula, source: DROP_SOURCE } }
  add(maker, { ...common, quantity: 'velocityDropMps', label: `velocity drop ${at.label}`, value: velocityDrop(before, segment, maker.context.expanded) })
  add(maker, { ...common, quantity: 'velocityDropPercent', label: `velocity drop ${at.label}, per cent`, value: velocityDropPercent(before.velocityMps, segment.velocityMps) })
}

const changes = [
  { from: 'amplitudeMv', quantity: 'amplitudeFallPercent', overall: 'amplitudeFallFromDistalPercent', label: 'amplitude fall', of: fallPercent },
  { from: 'areaMvMs', quantity: 'areaFallPercent', overall: 'areaFallFromDistalPercent', label: 'area fall', of: fallPercent },
  { from: 'durationMs', quantity: 'durationRisePercent', overall: 'durationRiseFromDistalPercent', label: 'duration rise', of: risePercent },
] as const

/** From the site before to this one, and, from the third site on, from the most distal one. */
function addChanges(maker: RunMaker, previous: PlacedRow, placed: PlacedRow, index: number, distal: number | null): void {
  const segment = segmentOf(previous, placed)
  const first = maker.rows[0] as PlacedRow
  for (const { from, quantity, overall, label, of } of changes) {
    const proximal = cellOf(placed.row, from)
    const adjacent = changeOf(cellOf(previous.row, from), proximal, of)
    const common = { rowId: placed.row.id, at: segment.id, typed: false, supporting: true, query: questionFor(maker, segment.id, distal) }
    if (adjacent) add(maker, { ...common, quantity, label: `${label}, ${previous.label} to ${placed.label}`, ...adjacent })
    const whole = index > 1 ? changeOf(cellOf(first.row, from), proximal, of) : null
    if (whole) add(maker, { ...common, query: undefined, quantity: overall, at: `${first.row.site}-${placed.row.site}`, label: `${label}, ${first.label} to ${placed.label}`, ...whole })
  }
  addLimitedOnly(maker, previous, placed, segment.id, distal)
}

type ChangeRule = (pair: { distal: number, proximal: number }) => ComputedValue

function changeOf(distal: ComputedValue, proximal: ComputedValue, of: ChangeRule): { value: ComputedValue, how?: { formula: string, source: string } } | null {
  if (distal.kind !== 'value') return null
  if (isNoResponse(proximal)) return { value: absentBecause('no-response') }
  if (proximal.kind !== 'value') return null
  return { value: of({ distal: distal.value, proximal: proximal.value }), how: { formula: `from ${distal.value} to ${proximal.value}`, source: CHANGE_SOURCE } }
}

/** Measures that are shown only where the set in use has a limit for them. */
function addLimitedOnly(maker: RunMaker, previous: PlacedRow, placed: PlacedRow, segmentId: string, distal: number | null): void {
  const [near, far] = [cellOf(previous.row, 'amplitudeMv'), cellOf(placed.row, 'amplitudeMv')]
  if (near.kind !== 'value' || far.kind !== 'value') return
  const query = questionFor(maker, segmentId, distal)
  const measures = [
    { quantity: 'amplitudeFallMv', label: 'amplitude fall', value: valueOf(near.value - far.value) },
    { quantity: 'amplitudeRatio', label: 'amplitude ratio', value: amplitudeRatio({ distal: near.value, proximal: far.value }) },
  ]
  for (const { quantity, label, value } of measures) {
    if (maker.context.limits({ ...query, quantity }).kind !== 'limits') continue
    add(maker, { rowId: placed.row.id, quantity, at: segmentId, label: `${label}, ${previous.label} to ${placed.label}`, typed: false, value, query, how: { formula: `${near.value} mV and ${far.value} mV`, source: CHANGE_SOURCE } })
  }
}

function addDistalIndices(maker: RunMaker, placed: PlacedRow, segment: Segment, distalDistanceMm: number | null): void {
  const latency = placed.row.values.latencyMs
  if (typeof latency !== 'number' || distalDistanceMm === null) return
  const input = { distalDistanceMm, velocityMps: segment.velocityMps, distalLatencyMs: latency }
  const residual = residualLatency(input)
  const uncertainty = residualLatencyUncertainty({ distalDistanceMm, segmentDistanceMm: segment.distanceMm, timeMs: segment.timeMs }, maker.context.expanded)
  const formula = `${distalDistanceMm} mm, ${roundForPrint(segment.velocityMps, 1)} m/s, ${latency} ms`
  const common = { rowId: placed.row.id, at: placed.row.site, typed: false, supporting: true, query: questionFor(maker, placed.row.site, distalDistanceMm) }
  add(maker, { ...common, quantity: 'terminalLatencyIndex', label: 'terminal latency index', value: terminalLatencyIndex(input), how: { formula, source: 'Kang et al., J Korean Neurol Assoc 2004;22:609-612' } })
  add(maker, { ...common, quantity: 'residualLatencyMs', label: 'residual latency', value: residual.kind === 'value' ? valueOf(residual.value, uncertainty) : residual, how: { formula, source: 'Khosrawi and Dehghan, J Res Med Sci 2013;18:934-938' } })
}
