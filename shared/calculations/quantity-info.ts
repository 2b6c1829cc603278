import { computedQuantities } from '../catalogue/computed-quantities'
import { quantities, type Quantity } from '../catalogue/quantities'

/**
 * Label, unit, decimals and behaviour in the cold of every number that is printed.
 *
 * Cold lengthens latencies and durations and slows velocities; it enlarges amplitudes and lessens a decrement, so that a
 * loss may be hidden. Source: directions read in a society's teaching page; Denys 1991 from memory.
 */
export type ColdEffect = 'lengthens' | 'slows' | 'hides-loss' | 'hides-excess' | 'none'

export interface QuantityInfo {
  id: string
  label: string
  unit: string
  ucum: string
  printDecimals: number
  cold: ColdEffect
}

const ucumOf: Record<string, string> = { '': '1', 'µV': 'uV' }
const own = (id: string, label: string, unit: string, printDecimals: number, cold: ColdEffect): QuantityInfo =>
  ({ id, label, unit, ucum: ucumOf[unit] ?? unit, printDecimals, cold })

/** Computed numbers beyond those that the reference sets have limits for. */
const ownQuantities: QuantityInfo[] = [
  own('stepLatencyMs', 'latency step', 'ms', 2, 'lengthens'),
  own('segmentVelocityMps', 'segment velocity', 'm/s', 0, 'slows'),
  own('amplitudeFallFromDistalPercent', 'amplitude fall from the most distal site', '%', 0, 'none'),
  own('amplitudeFallMv', 'amplitude fall', 'mV', 1, 'none'),
  own('areaFallFromDistalPercent', 'area fall from the most distal site', '%', 0, 'none'),
  own('durationRiseFromDistalPercent', 'duration rise from the most distal site', '%', 0, 'lengthens'),
  own('fEstimateDifferenceMs', 'shortest F minus estimate', 'ms', 1, 'none'),
  own('peripheralLatencyMs', 'peripheral motor latency', 'ms', 1, 'lengthens'),
  own('sideDifferenceMv', 'side difference', 'mV', 1, 'hides-excess'),
  own('sideDifferenceUv', 'side difference', 'µV', 0, 'hides-excess'),
  own('sideRatio', 'smaller over larger side', '', 2, 'hides-loss'),
  own('correctedVelocityMps', 'velocity, temperature-corrected', 'm/s', 0, 'none'),
  own('correctedLatencyMs', 'latency, temperature-corrected', 'ms', 1, 'none'),
]

const coldByKind: Partial<Record<Quantity['kind'], ColdEffect>> = { latency: 'lengthens', duration: 'lengthens', velocity: 'slows', amplitude: 'hides-loss', area: 'hides-loss' }
/** Where the kind of number does not tell. */
const coldById: Record<string, ColdEffect> = {
  velocityDropMps: 'lengthens', velocityDropPercent: 'lengthens', durationRisePercent: 'lengthens', sideDifferenceMps: 'lengthens',
  decrementPercent: 'hides-excess', sideDifferencePercent: 'hides-excess',
  suralRadialRatio: 'hides-loss', fEstimateMs: 'none', hExpectedMs: 'none',
}
const longLabels: Record<string, string> = {
  onsetLatencyMs: 'onset latency', peakLatencyMs: 'peak latency',
  minimumLatencyMs: 'shortest F latency', meanLatencyMs: 'mean F latency', maximumLatencyMs: 'longest F latency',
}

const fromCatalogue = [...Object.values<Quantity>(quantities), ...Object.values(computedQuantities)].map(({ id, label, unit, ucum, printDecimals, kind }): QuantityInfo =>
  ({ id, label: longLabels[id] ?? label, unit, ucum, printDecimals, cold: coldById[id] ?? coldByKind[kind] ?? 'none' }))

/** All of them, for lists and tests. */
export const quantityInfos: readonly QuantityInfo[] = [...fromCatalogue, ...ownQuantities]
const infos = new Map(quantityInfos.map(info => [info.id, info]))

/**
 * What there is to know about a typed or computed quantity.
 *
 * @example
 * quantityInfo('velocityDropMps').unit // => 'm/s'
 */
export function quantityInfo(id: string): QuantityInfo {
  return infos.get(id) ?? { id, label: id, unit: '', ucum: '1', printDecimals: 2, cold: 'none' }
}

/**
 * Decimals a number is printed with. Sensory amplitudes under 10 µV keep one (number 1 of the decisions on numbers).
 *
 * @example
 * decimalsFor(quantityInfo('amplitudeUv'), 6.4) // => 1
 */
export function decimalsFor(info: QuantityInfo, value: number): number {
  return info.unit === 'µV' && Math.abs(value) < 10 ? Math.max(1, info.printDecimals) : info.printDecimals
}
