import type { QuantityId } from '../../catalogue/quantities'
import { techniques } from '../../catalogue/nerves'
import type { Entry, RunRow } from '../../schemas/study'
import { absentBecause, notComputable, numberOf, valueOf } from '../computed-value'
import { chronodispersion, fEstimate, fRatio, fWaveVelocity, peripheralMotorLatency, persistence } from '../f-wave'
import { quantityInfo } from '../quantity-info'
import { standingRun, type StudyContext } from '../study-context'
import type { PlacedRow } from '../placed-rows'
import type { ComputedValue } from '../types'
import { add, addTyped, askerOf, entryValue, type RunMaker } from './run-maker'

/** Motor technique of the same nerve and muscle, whose latency and velocity the estimate uses. */
const motorByFWave = new Map(techniques.filter(one => one.kind === 'f-wave').map((wave) => {
  const motor = techniques.find(one => one.kind === 'motor' && one.nerve === wave.nerve && one.recording.id === wave.recording.id)
  return [wave.id, motor?.id]
}))

/** What a row of F-waves comes to, from the typed summary or from the single latencies of its series. */
interface FMeasures { minimum: ComputedValue, mean: ComputedValue, maximum: ComputedValue, responses: number | null, stimuli: number | null }

/**
 * Shortest, mean and longest latency and the counts; typed values stand before those of the series.
 *
 * @example
 * fMeasures({ values: {}, series: [26.1, 'no-response', 27.3] }).responses // => 2
 */
export function fMeasures(row: Pick<RunRow, 'values' | 'series'>, latencyMs?: number): FMeasures {
  const series = row.series ?? []
  const numbers = series.filter((entry): entry is number => typeof entry === 'number')
  const count = (entry: Entry | undefined, counted: number) => typeof entry === 'number' ? entry : series.length > 0 ? counted : null
  const none = series.length > 0 && numbers.length === 0 && series.includes('no-response')
  const either = (quantity: QuantityId, fromSeries: () => number): ComputedValue => {
    const typed = row.values[quantity]
    if (typed !== undefined) return entryValue(typed, latencyMs)
    if (numbers.length > 0) return valueOf(fromSeries(), latencyMs)
    return none ? absentBecause('no-response') : notComputable(`${quantityInfo(quantity).label} missing`)
  }
  return {
    minimum: either('minimumLatencyMs', () => Math.min(...numbers)),
    mean: either('meanLatencyMs', () => numbers.reduce((sum, one) => sum + one, 0) / numbers.length),
    maximum: either('maximumLatencyMs', () => Math.max(...numbers)),
    responses: count(row.values.responseCount, numbers.length),
    stimuli: count(row.values.stimulusCount, series.length),
  }
}

/** Results of a run of F-waves. */
export function assessFWave(maker: RunMaker): void {
  for (const placed of maker.rows) {
    addTyped(maker, placed, { place: '', asker: askerOf(maker, null), askAt: null, supporting: quantity => quantity !== 'minimumLatencyMs' })
    const measures = fMeasures(placed.row, maker.context.expanded.latencyMs)
    addFromSeries(maker, placed, measures)
    addCounts(maker, placed, measures)
    addWay(maker, placed, measures)
  }
}

type Extra = { value: ComputedValue, formula: string, source: string, supporting?: boolean }

function addComputed(maker: RunMaker, placed: PlacedRow, quantity: string, extra: Extra): void {
  add(maker, placed, {
    quantity, label: quantityInfo(quantity).label, typed: false, value: extra.value, supporting: extra.supporting ?? true,
    how: extra.value.kind === 'value' ? { formula: extra.formula, source: extra.source } : undefined, asker: askerOf(maker, null), askAt: null,
  })
}

function addFromSeries(maker: RunMaker, placed: PlacedRow, measures: FMeasures): void {
  if (!placed.row.series?.length) return
  const from = { formula: `from ${placed.row.series.length} recorded responses`, source: 'arithmetic' }
  const ways: [QuantityId, ComputedValue][] = [['minimumLatencyMs', measures.minimum], ['meanLatencyMs', measures.mean], ['maximumLatencyMs', measures.maximum]]
  for (const [quantity, value] of ways) {
    if (placed.row.values[quantity] === undefined) addComputed(maker, placed, quantity, { value, ...from, supporting: quantity !== 'minimumLatencyMs' })
  }
}

function addCounts(maker: RunMaker, placed: PlacedRow, { responses, stimuli, minimum, maximum }: FMeasures): void {
  if (responses !== null && stimuli !== null) {
    addComputed(maker, placed, 'persistencePercent', { value: persistence({ responses, stimuli }), formula: `${responses} of ${stimuli}`, source: 'definition' })
  }
  if (minimum.kind === 'value' && maximum.kind === 'value') {
    const value = chronodispersion({ minimumMs: minimum.value, maximumMs: maximum.value, responses }, maker.context.expanded)
    addComputed(maker, placed, 'chronodispersionMs', { value, formula: `${maximum.value} ms - ${minimum.value} ms, ${responses} responses`, source: 'Fisher MA (secondary source)' })
  }
}

/** Measures that need the M latency, the way to the spine, and the motor run of the same nerve. */
function addWay(maker: RunMaker, placed: PlacedRow, measures: FMeasures): void {
  const minimumMs = numberOf(measures.minimum)
  const motor = motorNumbers(maker.context, motorByFWave.get(maker.technique.id), maker.run.side)
  const typedM = placed.row.values.mLatencyMs
  const mLatencyMs = typeof typedM === 'number' ? typedM : motor.latencyMs
  const length = placed.row.values.limbLengthMm
  if (minimumMs !== null && mLatencyMs !== null) {
    const formula = `F ${minimumMs} ms, M ${mLatencyMs} ms`
    addComputed(maker, placed, 'fRatio', { value: fRatio({ minimumMs, mLatencyMs }), formula, source: 'Kimura, from memory' })
    addComputed(maker, placed, 'peripheralLatencyMs', { value: peripheralMotorLatency({ minimumMs, mLatencyMs }), formula, source: 'Groppa et al., Clin Neurophysiol 2012;123:858-882' })
    if (typeof length === 'number') addComputed(maker, placed, 'fVelocityMps', { value: fWaveVelocity({ distanceMm: length, minimumMs, mLatencyMs }, maker.context.expanded), formula: `${formula}, ${length} mm`, source: 'Kimura 1974, from memory' })
  }
  if (typeof length === 'number' && mLatencyMs !== null && motor.velocityMps !== null) addEstimate(maker, placed, { distanceMm: length, distalLatencyMs: mLatencyMs, velocityMps: motor.velocityMps }, minimumMs)
}

function addEstimate(maker: RunMaker, placed: PlacedRow, input: { distanceMm: number, distalLatencyMs: number, velocityMps: number }, minimumMs: number | null): void {
  const value = fEstimate(input)
  const formula = `${input.distanceMm} mm, motor velocity of the same nerve, M ${input.distalLatencyMs} ms`
  const source = 'textbook-derived study notes (read)'
  addComputed(maker, placed, 'fEstimateMs', { value, formula, source })
  if (value.kind === 'value' && minimumMs !== null) addComputed(maker, placed, 'fEstimateDifferenceMs', { value: valueOf(minimumMs - value.value), formula, source })
}

/** Distal latency and velocity of the first segment of the motor run that stands for this nerve and side. */
function motorNumbers(context: StudyContext, technique: string | undefined, side: RunMaker['run']['side']): { latencyMs: number | null, velocityMps: number | null } {
  const known = technique === undefined ? undefined : standingRun(context, technique, side)
  const assessed = known && context.assessed.get(known.run.id)
  const usual = known?.technique?.sites.find(site => site.usual)?.id
  const latency = assessed?.results.find(result => result.quantity === 'latencyMs' && result.at === usual)
  const velocity = assessed?.results.find(result => result.quantity === 'velocityMps')
  return { latencyMs: numberOf(latency?.value), velocityMps: numberOf(velocity?.value) }
}
