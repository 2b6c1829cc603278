import { notComputable, valueOf } from './computed-value'
import type { ComputedValue } from './types'

/**
 * Correction of slow values for a cold limb. Off unless the organisation turns it on, and then beside the measured value,
 * never instead of it; never for amplitudes, and not where slowing itself is the question: the factors come from healthy
 * nerves (Wu PBJ et al., Am J Phys Med Rehabil 1993;72:369-371, read).
 */

/** Skin temperature that values are corrected to, in °C. Source: guideline of the Norwegian society (34 °C, read). */
export const REFERENCE_CELSIUS = 34

/** m/s per °C. Source: Halar EM et al., Arch Phys Med Rehabil 1980, 1981, 1983, from memory. Others: 1.5, from memory. */
const slopes: Record<string, number> = {
  'median-motor': 1.5, 'ulnar-motor': 2.1, 'fibular-motor': 2.0, 'tibial-motor': 1.1,
  'median-sensory': 1.4, 'ulnar-sensory': 1.6, 'sural-sensory': 1.7,
}
/** ms per °C. Source: Kim DE, Ann Clin Neurophysiol 2006;8:125-134 (secondary source read). */
const LATENCY_SLOPE = 0.2

/**
 * Velocity at the reference temperature by a straight line: v + k (reference - measured temperature).
 *
 * @example
 * correctedVelocity({ velocityMps: 44, celsius: 29, nerve: 'median', kind: 'motor' }) // => { kind: 'value', value: 51.5 } (m/s)
 */
export function correctedVelocity(input: { velocityMps: number, celsius: number, nerve: string, kind: string }): ComputedValue {
  const slope = slopes[`${input.nerve}-${input.kind}`] ?? 1.5
  return valueOf(input.velocityMps + slope * (REFERENCE_CELSIUS - input.celsius))
}

/**
 * Velocity at the reference temperature by the exponential of De Jesus: v x exp(0.0419 (reference - measured)).
 * Source: De Jesus PV, Hausmanowa-Petrusewicz I, Barchi RL, Neurology 1973;23:1182-1189, coefficient from memory.
 *
 * @example
 * exponentiallyCorrectedVelocity({ velocityMps: 44, celsius: 29 }) // => { kind: 'value', value: 54.25… } (m/s)
 */
export function exponentiallyCorrectedVelocity(input: { velocityMps: number, celsius: number }): ComputedValue {
  return valueOf(input.velocityMps * Math.exp(0.0419 * (REFERENCE_CELSIUS - input.celsius)))
}

/**
 * Latency at the reference temperature: latency - 0.2 ms per °C.
 *
 * @example
 * correctedLatency({ latencyMs: 4.8, celsius: 29 }) // => { kind: 'value', value: 3.8 } (ms)
 */
export function correctedLatency(input: { latencyMs: number, celsius: number }): ComputedValue {
  const corrected = input.latencyMs - LATENCY_SLOPE * (REFERENCE_CELSIUS - input.celsius)
  return corrected > 0 ? valueOf(corrected) : notComputable('the correction is larger than the latency')
}
