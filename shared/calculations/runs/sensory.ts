import type { QuantityId } from '../../catalogue/quantities'
import { notComputable, numberOf } from '../computed-value'
import { quantityInfo } from '../quantity-info'
import { segmentalSensoryVelocity, sensoryVelocity } from '../sensory-velocity'
import type { ComputedValue } from '../types'
import { addCorrected } from './corrected'
import { add, addTyped, cellOf, questionFor, type PlacedRow, type RunMaker } from './run-maker'

const SOURCE = 'distance over onset latency: common practice; uncertainty by JCGM 100, k = 2'

/** Results of a sensory or mixed run: what was typed, the velocity of each row, and between rows where there are several. */
export function assessSensory(maker: RunMaker): void {
  const several = maker.rows.length > 1
  for (const [index, placed] of maker.rows.entries()) {
    const place = several ? ` at ${placed.label}` : ''
    const distance = placed.row.values.distanceMm
    const distanceMm = typeof distance === 'number' ? distance : null
    addTyped(maker, placed, {
      label: (quantity: QuantityId) => `${quantityInfo(quantity).label}${place}`,
      at: placed.row.site,
      distanceMm,
      supporting: quantity => quantity === 'durationMs',
    })
    addVelocity(maker, placed, several ? `, ${placed.label}` : '', distanceMm)
    const previous = maker.rows[index - 1]
    if (previous) addSegment(maker, previous, placed)
  }
}

const isStarted = ({ row }: PlacedRow) => row.values.onsetLatencyMs !== undefined || row.values.peakLatencyMs !== undefined || row.values.amplitudeUv !== undefined

function addVelocity(maker: RunMaker, placed: PlacedRow, place: string, distanceMm: number | null): void {
  if (!isStarted(placed)) return
  const onset = cellOf(placed.row, 'onsetLatencyMs')
  const value = onset.kind === 'value' && distanceMm !== null
    ? sensoryVelocity({ distanceMm, onsetLatencyMs: onset.value }, maker.context.expanded)
    : notComputable(onset.kind === 'value' ? 'distance missing' : reason(onset))
  add(maker, {
    rowId: placed.row.id, quantity: 'velocityMps', at: placed.row.site, label: `velocity${place}`, typed: false, value,
    how: value.kind === 'value' ? { formula: `${distanceMm} mm / ${numberOf(onset)} ms`, source: SOURCE } : undefined,
    query: questionFor(maker, placed.row.site, distanceMm),
  })
  if (value.kind === 'value') addCorrected(maker, placed, 'velocity', value.value)
}

const absenceWords = { 'no-response': 'no response', 'technical': 'not recordable', 'not-done': 'not done', 'stopped': 'stopped' } as const
const reason = (value: ComputedValue) => value.kind === 'absent' ? absenceWords[value.absence] : value.kind === 'not-computable' ? value.because : ''

function addSegment(maker: RunMaker, previous: PlacedRow, placed: PlacedRow): void {
  const [nearD, farD] = [cellOf(previous.row, 'distanceMm'), cellOf(placed.row, 'distanceMm')]
  const [near, far] = [cellOf(previous.row, 'onsetLatencyMs'), cellOf(placed.row, 'onsetLatencyMs')]
  if (nearD.kind !== 'value' || farD.kind !== 'value' || near.kind !== 'value' || far.kind !== 'value') return
  const isNext = placed.place === previous.place + 1
  const at = isNext && placed.site?.segment ? placed.site.segment.id : `${previous.row.site}-${placed.row.site}`
  add(maker, {
    rowId: placed.row.id, quantity: 'segmentVelocityMps', at, label: `velocity, ${placed.label} to ${previous.label}`, typed: false, supporting: true,
    value: segmentalSensoryVelocity({ distanceMm: farD.value, onsetLatencyMs: far.value }, { distanceMm: nearD.value, onsetLatencyMs: near.value }, maker.context.expanded),
    how: { formula: `(${farD.value} - ${nearD.value}) mm / (${far.value} - ${near.value}) ms`, source: SOURCE },
    query: questionFor(maker, at, farD.value),
  })
}
