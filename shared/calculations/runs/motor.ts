import type { QuantityId } from '../../catalogue/quantities'
import { absentBecause, isNoResponse, notComputable, valueOf } from '../computed-value'
import { amplitudeRatio, fallPercent, risePercent } from '../change-between-sites'
import { conductionVelocity } from '../conduction-velocity'
import type { LimitAsker } from '../limit-asker'
import type { PlacedRow } from '../placed-rows'
import { residualLatency, residualLatencyUncertainty } from '../residual-latency'
import { roundForPrint } from '../round-for-print'
import { terminalLatencyIndex } from '../terminal-latency-index'
import type { ComputedValue } from '../types'
import { usualIndex } from '../placed-rows'
import { velocityDrop, velocityDropPercent } from '../velocity-drop'
import { absenceAt } from '../words'
import { addCorrected } from './corrected'
import { add, addTyped, askerOf, cellOf, type RunMaker } from './run-maker'

const VELOCITY_SOURCE = 'Mallik and Weir, J Neurol Neurosurg Psychiatry 2005;76(Suppl 2):ii23-ii31; uncertainty by JCGM 100, k = 2'
const CHANGE_SOURCE = 'negative-peak measures, EFNS/PNS criteria (PMC8108415, table 2)'
const DROP_SOURCE = 'Buschbacher, Am J Phys Med Rehabil 1999;78(S):S9-S14'

/** A segment that could be computed: kept for the next one and for the indices of the distal part. */
interface Segment { velocityMps: number, distanceMm: number, timeMs: number }
interface Place { id: string, words: string }

/**
 * Results of a motor run: what was typed, and from it segment velocities, drops of velocity, falls of amplitude and area,
 * rises of duration, terminal latency index and residual latency.
 */
export function assessMotor(maker: RunMaker): void {
  const distalIndex = usualIndex(maker.rows, maker.technique)
  const distances = distancesToElectrode(maker.rows)
  const distalDistance = distances[distalIndex] ?? null
  const asker = askerOf(maker, distalDistance)
  let before: Segment | null = null
  for (const [index, placed] of maker.rows.entries()) {
    const own = index === distalIndex ? asker : askerOf(maker, distances[index] ?? null)
    addTyped(maker, placed, { place: ` at ${placed.label}`, asker: own, askAt: placed.row.site, supporting: index === distalIndex ? isSecondary : always })
    const latency = placed.row.values.latencyMs
    if (index === distalIndex && typeof latency === 'number') addCorrected(maker, placed, 'latency', latency)
    const previous = maker.rows[index - 1]
    // A site that stands twice makes no segment with itself; it is remarked on.
    if (!previous || previous.row.site === placed.row.site || !isStarted(placed)) continue
    const place = segmentOf(previous, placed)
    const segment = addVelocity(maker, previous, placed, place, asker)
    if (segment && isShort(maker)) addStep(maker, placed, segment, place)
    if (segment && before && placed.site?.segment?.entrapment) addDrop(maker, placed, placed.site.segment, [before, segment], asker)
    addChanges(maker, previous, placed, index, place, asker)
    if (segment && index === distalIndex + 1) addDistalIndices(maker, previous, segment, distalDistance, asker)
    before = segment
  }
  // Another nerve beside the line: what was typed, never judged and never part of a segment.
  for (const placed of maker.asides) addTyped(maker, placed, { place: `, ${placed.label}`, askAt: null, supporting: always })
}

const isShort = ({ run, technique }: RunMaker) => run.shortSegments === true || technique.shortSegments === true

/** The time over one short segment: over 20 mm it tells more than a velocity, whose uncertainty is as large as itself. */
function addStep(maker: RunMaker, placed: PlacedRow, { timeMs }: Segment, place: Place): void {
  add(maker, placed, {
    quantity: 'stepLatencyMs', at: place.id, label: `latency step${place.words}`, typed: false,
    value: valueOf(timeMs, Math.SQRT2 * maker.context.expanded.latencyMs), how: { formula: 'latency here - latency at the step before', source: 'arithmetic' },
  })
}

const always = () => true
const isSecondary = (quantity: QuantityId) => quantity === 'durationMs' || quantity === 'areaMvMs'

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

/** The catalogue's segment where the two sites are neighbours there, otherwise both names. */
function segmentOf(previous: PlacedRow, placed: PlacedRow): Place {
  const segment = placed.site?.segment
  const between = `, ${placed.label} to ${previous.label}`
  if (segment && previous.site && placed.place === previous.place + 1) {
    return { id: segment.id, words: segment.label.startsWith('across') ? ` ${segment.label}` : between }
  }
  return { id: `${previous.row.site}-${placed.row.site}`, words: between }
}

function addVelocity(maker: RunMaker, previous: PlacedRow, placed: PlacedRow, place: Place, asker: LimitAsker): Segment | null {
  const [distalLatencyMs, proximalLatencyMs, distanceMm] = [previous.row.values.latencyMs, placed.row.values.latencyMs, placed.row.values.distanceMm]
  const isComplete = typeof distalLatencyMs === 'number' && typeof proximalLatencyMs === 'number' && typeof distanceMm === 'number'
  const value = isComplete
    ? conductionVelocity({ distanceMm, proximalLatencyMs, distalLatencyMs }, maker.context.expanded)
    : notComputable(whyNot(previous, placed))
  add(maker, placed, {
    quantity: 'velocityMps', at: place.id, label: `velocity${place.words}`, typed: false, value, asker,
    how: value.kind === 'value' ? { formula: `${distanceMm} mm / (${proximalLatencyMs} ms - ${distalLatencyMs} ms)`, source: VELOCITY_SOURCE } : undefined,
  })
  if (value.kind !== 'value' || !isComplete) return null
  addCorrected(maker, placed, 'velocity', value.value)
  return { velocityMps: value.value, distanceMm, timeMs: proximalLatencyMs - distalLatencyMs }
}

/** The first input that is missing or absent, in words. */
function whyNot(previous: PlacedRow, placed: PlacedRow): string {
  const inputs = [[cellOf(previous.row, 'latencyMs'), previous], [cellOf(placed.row, 'latencyMs'), placed], [cellOf(placed.row, 'distanceMm'), placed]] as const
  for (const [value, { label }] of inputs) {
    if (value.kind === 'absent') return `${absenceAt[value.absence]} at ${label}`
    if (value.kind === 'not-computable') return `${value.because} at ${label}`
  }
  return ''
}

function addDrop(maker: RunMaker, placed: PlacedRow, at: { id: string, label: string }, [before, segment]: [Segment, Segment], asker: LimitAsker): void {
  const how = { formula: `${roundForPrint(before.velocityMps, 1)} m/s against ${roundForPrint(segment.velocityMps, 1)} m/s`, source: DROP_SOURCE }
  add(maker, placed, { quantity: 'velocityDropMps', at: at.id, label: `velocity drop ${at.label}`, typed: false, supporting: true, asker, how, value: velocityDrop(before, segment, maker.context.expanded) })
  add(maker, placed, { quantity: 'velocityDropPercent', at: at.id, label: `relative velocity drop ${at.label}`, typed: false, supporting: true, asker, how, value: velocityDropPercent(before.velocityMps, segment.velocityMps) })
}

const changes = [
  { from: 'amplitudeMv', quantity: 'amplitudeFallPercent', overall: 'amplitudeFallFromDistalPercent', label: 'amplitude fall', of: fallPercent },
  { from: 'areaMvMs', quantity: 'areaFallPercent', overall: 'areaFallFromDistalPercent', label: 'area fall', of: fallPercent },
  { from: 'durationMs', quantity: 'durationRisePercent', overall: 'durationRiseFromDistalPercent', label: 'duration rise', of: risePercent },
] as const

/** From the site before to this one, and, from the third site on, from the most distal one. */
function addChanges(maker: RunMaker, previous: PlacedRow, placed: PlacedRow, index: number, place: Place, asker: LimitAsker): void {
  const first = maker.rows[0] as PlacedRow
  for (const { from, quantity, overall, label, of } of changes) {
    if (placed.row.values[from] === undefined) continue
    addChange(maker, previous, placed, { from, of, quantity, at: place.id, label, asker })
    if (index > 1) addChange(maker, first, placed, { from, of, quantity: overall, at: `${first.row.site}-${placed.row.site}`, label })
  }
  addLimitedOnly(maker, previous, placed, place.id, asker)
}

interface Change { from: QuantityId, of: (pair: { distal: number, proximal: number }) => ComputedValue, quantity: string, at: string, label: string, asker?: LimitAsker }

function addChange(maker: RunMaker, previous: PlacedRow, placed: PlacedRow, change: Change): void {
  const distal = previous.row.values[change.from]
  const proximal = cellOf(placed.row, change.from)
  if (typeof distal !== 'number' || proximal.kind === 'not-computable' || (proximal.kind === 'absent' && !isNoResponse(proximal))) return
  add(maker, placed, {
    quantity: change.quantity, at: change.at, label: `${change.label}, ${previous.label} to ${placed.label}`, typed: false, supporting: true, asker: change.asker,
    value: proximal.kind === 'value' ? change.of({ distal, proximal: proximal.value }) : absentBecause('no-response'),
    how: proximal.kind === 'value' ? { formula: `from ${distal} to ${proximal.value}`, source: CHANGE_SOURCE } : undefined,
  })
}

/** Measures that are shown only where the set in use has a limit for them. */
function addLimitedOnly(maker: RunMaker, previous: PlacedRow, placed: PlacedRow, at: string, asker: LimitAsker): void {
  const [distal, proximal] = [previous.row.values.amplitudeMv, placed.row.values.amplitudeMv]
  if (typeof distal !== 'number' || typeof proximal !== 'number') return
  const between = `, ${previous.label} to ${placed.label}`
  if (asker.ask('amplitudeFallMv', at).kind === 'limits') {
    add(maker, placed, { at, typed: false, asker, quantity: 'amplitudeFallMv', label: `amplitude fall in mV${between}`, value: valueOf(distal - proximal), how: { formula: `${distal} mV - ${proximal} mV`, source: CHANGE_SOURCE } })
  }
  if (asker.ask('amplitudeRatio', at).kind === 'limits') {
    add(maker, placed, { at, typed: false, asker, quantity: 'amplitudeRatio', label: `amplitude ratio${between}`, value: amplitudeRatio({ distal, proximal }), how: { formula: `${proximal} mV / ${distal} mV`, source: CHANGE_SOURCE } })
  }
}

function addDistalIndices(maker: RunMaker, placed: PlacedRow, segment: Segment, distalDistanceMm: number | null, asker: LimitAsker): void {
  const distalLatencyMs = placed.row.values.latencyMs
  if (typeof distalLatencyMs !== 'number' || distalDistanceMm === null) return
  const input = { distalDistanceMm, velocityMps: segment.velocityMps, distalLatencyMs }
  const residual = residualLatency(input)
  const uncertainty = residualLatencyUncertainty({ distalDistanceMm, segmentDistanceMm: segment.distanceMm, timeMs: segment.timeMs }, maker.context.expanded)
  const formula = `${distalDistanceMm} mm, ${roundForPrint(segment.velocityMps, 1)} m/s, ${distalLatencyMs} ms`
  const at = placed.row.site
  add(maker, placed, { quantity: 'terminalLatencyIndex', at, label: 'terminal latency index', typed: false, supporting: true, asker, value: terminalLatencyIndex(input), how: { formula, source: 'Kang et al., J Korean Neurol Assoc 2004;22:609-612' } })
  add(maker, placed, { quantity: 'residualLatencyMs', at, label: 'residual latency', typed: false, supporting: true, asker, value: residual.kind === 'value' ? valueOf(residual.value, uncertainty) : residual, how: { formula, source: 'Khosrawi and Dehghan, J Res Med Sci 2013;18:934-938' } })
}
