import { notComputable, valueOf } from './computed-value'
import type { ComputedValue } from './types'
import { propagate, type MeasurementUncertainty } from './uncertainty'

/**
 * Residual latency: the distal motor latency beyond what its distance would take at the velocity above it.
 *
 * residual (ms) = distal motor latency (ms) - distal distance (mm) / velocity of the next segment (m/s)
 *
 * Source: definition read in Khosrawi S, Dehghan F, J Res Med Sci 2013;18:934-938 (secondary source); the algebra from
 * memory (Kaeser 1970). Identity: residual = latency x (1 - terminal latency index).
 *
 * @example
 * residualLatency({ distalLatencyMs: 3.2, distalDistanceMm: 70, velocityMps: 55 }) // => { kind: 'value', value: 1.927… } (ms)
 */
export function residualLatency(input: { distalLatencyMs: number, distalDistanceMm: number, velocityMps: number }): ComputedValue {
  if (!(input.velocityMps > 0)) return notComputable('the velocity is not above 0')
  return valueOf(input.distalLatencyMs - input.distalDistanceMm / input.velocityMps)
}

/**
 * Expanded uncertainty of the residual latency. The distal latency enters twice: by itself and in the velocity.
 *
 * R = L1 - d (L2 - L1) / D: sensitivities 1 + d / D to L1, d / D to L2, t / D to d, d t / D^2 to D.
 *
 * @example
 * residualLatencyUncertainty({ distalDistanceMm: 80, segmentDistanceMm: 215, timeMs: 4 }, { distanceMm: 5, latencyMs: 0.1 })
 */
export function residualLatencyUncertainty(
  input: { distalDistanceMm: number, segmentDistanceMm: number, timeMs: number },
  expanded: MeasurementUncertainty,
): number {
  const share = input.distalDistanceMm / input.segmentDistanceMm
  return propagate([
    { sensitivity: 1 + share, expanded: expanded.latencyMs },
    { sensitivity: share, expanded: expanded.latencyMs },
    { sensitivity: input.timeMs / input.segmentDistanceMm, expanded: expanded.distanceMm },
    { sensitivity: share * input.timeMs / input.segmentDistanceMm, expanded: expanded.distanceMm },
  ])
}
