import { quantities, type Quantity } from './quantities'

/**
 * Every quantity that is computed and can carry a limit or be printed, beside the typed ones in `quantities`.
 * Possible and usual ranges are those of the typed inputs; a computed value has none of its own.
 */
const ms = (id: string, label: string): Quantity => ({ id, label, unit: 'ms', ucum: 'ms', typedDecimals: 0, printDecimals: 1, kind: 'latency' })
const mps = (id: string, label: string): Quantity => ({ id, label, unit: 'm/s', ucum: 'm/s', typedDecimals: 0, printDecimals: 0, kind: 'velocity' })
const percent = (id: string, label: string): Quantity => ({ id, label, unit: '%', ucum: '%', typedDecimals: 0, printDecimals: 0, kind: 'percent' })
const ratio = (id: string, label: string): Quantity => ({ id, label, unit: '', ucum: '1', typedDecimals: 0, printDecimals: 2, kind: 'ratio' })

const all: readonly Quantity[] = [
  mps('velocityDropMps', 'velocity drop'),
  percent('velocityDropPercent', 'velocity drop'),
  percent('amplitudeFallPercent', 'amplitude fall'),
  percent('areaFallPercent', 'area fall'),
  percent('durationRisePercent', 'duration rise'),
  ratio('amplitudeRatio', 'amplitude ratio'),
  ms('sideDifferenceMs', 'side difference'),
  mps('sideDifferenceMps', 'side difference'),
  percent('sideDifferencePercent', 'side difference'),
  ms('onsetDifferenceMs', 'onset difference'),
  ms('peakDifferenceMs', 'peak difference'),
  ms('motorLatencyDifferenceMs', 'motor latency difference'),
  ms('combinedIndexMs', 'combined sensory index'),
  ratio('terminalLatencyIndex', 'terminal latency index'),
  ms('residualLatencyMs', 'residual latency'),
  ms('chronodispersionMs', 'chronodispersion'),
  percent('persistencePercent', 'persistence'),
  ms('fEstimateMs', 'F estimate'),
  mps('fVelocityMps', 'F-wave velocity'),
  ratio('fRatio', 'F ratio'),
  ratio('hmRatio', 'H/M ratio'),
  ms('hExpectedMs', 'expected H latency'),
  percent('decrementPercent', 'decrement'),
  percent('incrementPercent', 'increment'),
  ratio('suralRadialRatio', 'sural/radial ratio'),
  { id: 'splitHandIndex', label: 'split-hand index', unit: 'mV', ucum: 'mV', typedDecimals: 0, printDecimals: 1, kind: 'amplitude' },
  ms('r2DifferenceMs', 'R2 difference, same side to other side'),
]

export const computedQuantities: Readonly<Record<string, Quantity>> = Object.fromEntries(all.map(quantity => [quantity.id, quantity]))

/**
 * The typed or computed quantity with this id, or undefined.
 *
 * @example
 * anyQuantity('suralRadialRatio')?.printDecimals // => 2
 */
export function anyQuantity(id: string): Quantity | undefined {
  return (quantities as Record<string, Quantity>)[id] ?? computedQuantities[id]
}
