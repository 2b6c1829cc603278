import type { QuantityId } from '../../catalogue/quantities'
import { notComputable } from '../computed-value'
import type { LimitAsker } from '../limit-asker'
import type { PlacedRow } from '../placed-rows'
import { segmentalSensoryVelocity, sensoryVelocity } from '../sensory-velocity'
import { absenceAt } from '../words'
import { addCorrected } from './corrected'
import { add, addTyped, askerOf, cellOf, type RunMaker } from './run-maker'

const SOURCE = 'distance over onset latency: common practice; uncertainty by JCGM 100, k = 2'

/** Results of a sensory or mixed run: what was typed, the velocity of each row, and between rows where there are several. */
export function assessSensory(maker: RunMaker): void {
  const several = maker.rows.length > 1
  for (const [index, placed] of maker.rows.entries()) {
    const distance = placed.row.values.distanceMm
    const distanceMm = typeof distance === 'number' ? distance : null
    const asker = askerOf(maker, distanceMm)
    addTyped(maker, placed, { place: several ? ` at ${placed.label}` : '', asker, askAt: placed.row.site, supporting: isDuration })
    addVelocity(maker, placed, several ? `, ${placed.label}` : '', distanceMm, asker)
    const previous = maker.rows[index - 1]
    if (previous && previous.row.site !== placed.row.site) addSegment(maker, previous, placed, asker)
  }
}

const isDuration = (quantity: QuantityId) => quantity === 'durationMs'
const isStarted = ({ row }: PlacedRow) => row.values.onsetLatencyMs !== undefined || row.values.peakLatencyMs !== undefined || row.values.amplitudeUv !== undefined

function addVelocity(maker: RunMaker, placed: PlacedRow, place: string, distanceMm: number | null, asker: LimitAsker): void {
  if (!isStarted(placed)) return
  const onset = placed.row.values.onsetLatencyMs
  const value = typeof onset === 'number' && distanceMm !== null
    ? sensoryVelocity({ distanceMm, onsetLatencyMs: onset }, maker.context.expanded)
    : notComputable(typeof onset === 'number' ? 'distance missing' : onset === undefined ? 'onset latency missing' : absenceAt[onset])
  add(maker, placed, {
    quantity: 'velocityMps', at: placed.row.site, label: `velocity${place}`, typed: false, value, asker,
    how: value.kind === 'value' ? { formula: `${distanceMm} mm / ${onset} ms`, source: SOURCE } : undefined,
  })
  if (value.kind === 'value') addCorrected(maker, placed, 'velocity', value.value)
}

function addSegment(maker: RunMaker, previous: PlacedRow, placed: PlacedRow, asker: LimitAsker): void {
  const [nearD, farD] = [cellOf(previous.row, 'distanceMm'), cellOf(placed.row, 'distanceMm')]
  const [near, far] = [cellOf(previous.row, 'onsetLatencyMs'), cellOf(placed.row, 'onsetLatencyMs')]
  if (nearD.kind !== 'value' || farD.kind !== 'value' || near.kind !== 'value' || far.kind !== 'value') return
  const isNext = placed.place === previous.place + 1
  add(maker, placed, {
    quantity: 'segmentVelocityMps', at: isNext && placed.site?.segment ? placed.site.segment.id : `${previous.row.site}-${placed.row.site}`,
    label: `velocity, ${placed.label} to ${previous.label}`, typed: false, supporting: true, asker,
    value: segmentalSensoryVelocity({ distanceMm: farD.value, onsetLatencyMs: far.value }, { distanceMm: nearD.value, onsetLatencyMs: near.value }, maker.context.expanded),
    how: { formula: `(${farD.value} - ${nearD.value}) mm / (${far.value} - ${near.value}) ms`, source: SOURCE },
  })
}
