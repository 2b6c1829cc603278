import { notComputable, valueOf } from './computed-value'
import type { ComputedValue } from './types'
import { velocityUncertainty, type MeasurementUncertainty } from './uncertainty'

/**
 * Motor conduction velocity over one segment.
 *
 * velocity (m/s) = distance (mm) / (proximal onset latency (ms) - distal onset latency (ms)); mm per ms is m/s.
 *
 * The difference takes out the time at the nerve ending and in the muscle, so one site alone never gives a motor
 * velocity. Source: Mallik A, Weir AI, J Neurol Neurosurg Psychiatry 2005;76(Suppl 2):ii23-ii31 (two-site principle
 * read; DOI 10.1136/jnnp.2005.069138 from memory).
 *
 * @example
 * conductionVelocity({ distanceMm: 215, proximalLatencyMs: 9.2, distalLatencyMs: 5.2 }, { distanceMm: 5, latencyMs: 0.1 })
 * // => { kind: 'value', value: 53.75, uncertainty: 2.28 } (m/s)
 */
export function conductionVelocity(
  segment: { distanceMm: number, proximalLatencyMs: number, distalLatencyMs: number },
  expanded?: MeasurementUncertainty,
): ComputedValue {
  const { distanceMm, proximalLatencyMs, distalLatencyMs } = segment
  const timeMs = proximalLatencyMs - distalLatencyMs
  if (distanceMm <= 0) return notComputable('the distance is not above 0')
  if (timeMs <= 0) return notComputable('the proximal latency is not longer than the distal one')
  const velocity = distanceMm / timeMs
  return valueOf(velocity, expanded && velocityUncertainty({ velocityMps: velocity, distanceMm, timeMs, cursors: 2 }, expanded))
}
