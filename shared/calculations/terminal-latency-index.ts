import { notComputable, valueOf } from './computed-value'
import type { ComputedValue } from './types'

/**
 * Terminal latency index: the distal motor latency adjusted for its distance and for the velocity above it.
 *
 * index = distal distance (mm) / (velocity of the next segment (m/s) x distal motor latency (ms)); a pure number.
 *
 * Source: concept and limits read in Kang SY et al., J Korean Neurol Assoc 2004;22:609-612 (secondary source; 50 mm,
 * controls 0.30 +/- 0.02); the algebra from memory (Shahani 1979), confirmed by units and by those limits.
 *
 * @example
 * terminalLatencyIndex({ distalDistanceMm: 70, velocityMps: 55, distalLatencyMs: 3.2 }) // => { kind: 'value', value: 0.3977… }
 */
export function terminalLatencyIndex(input: { distalDistanceMm: number, velocityMps: number, distalLatencyMs: number }): ComputedValue {
  const predictedTimes = input.velocityMps * input.distalLatencyMs
  if (!(predictedTimes > 0)) return notComputable('velocity and distal latency must be above 0')
  return valueOf(input.distalDistanceMm / predictedTimes)
}
