import { conductionVelocity } from './conduction-velocity'
import { notComputable, valueOf } from './computed-value'
import type { ComputedValue } from './types'
import { velocityUncertainty, type MeasurementUncertainty } from './uncertainty'

/**
 * Sensory or mixed velocity from one stimulus site.
 *
 * velocity (m/s) = distance from cathode to active electrode (mm) / onset latency (ms)
 *
 * Only the onset latency gives it: distance over peak latency is no maximal velocity. No nerve ending to cross, so one
 * site is enough. Source: onset as the fastest fibres, peak as the bulk of them, distance over onset latency: read in a
 * secondary source of the formula collection (F1.2); common practice.
 *
 * @example
 * sensoryVelocity({ distanceMm: 140, onsetLatencyMs: 3.8 }) // => { kind: 'value', value: 36.84… } (m/s)
 */
export function sensoryVelocity(response: { distanceMm: number, onsetLatencyMs: number }, expanded?: MeasurementUncertainty): ComputedValue {
  const { distanceMm, onsetLatencyMs } = response
  if (distanceMm <= 0) return notComputable('the distance is not above 0')
  if (onsetLatencyMs <= 0) return notComputable('the onset latency is not above 0')
  const velocity = distanceMm / onsetLatencyMs
  return valueOf(velocity, expanded && velocityUncertainty({ velocityMps: velocity, distanceMm, timeMs: onsetLatencyMs, cursors: 1 }, expanded))
}

/**
 * Sensory velocity between two stimulus sites, both distances being to the recording electrode.
 *
 * velocity (m/s) = (proximal distance - distal distance (mm)) / (proximal - distal onset latency (ms))
 *
 * Source: from memory (common practice; F1.3 of the formula collection). Both distances carry the stated uncertainty.
 *
 * @example
 * segmentalSensoryVelocity({ distanceMm: 140, onsetLatencyMs: 3.0 }, { distanceMm: 70, onsetLatencyMs: 1.5 })
 * // => { kind: 'value', value: 46.66… } (m/s)
 */
export function segmentalSensoryVelocity(
  proximal: { distanceMm: number, onsetLatencyMs: number },
  distal: { distanceMm: number, onsetLatencyMs: number },
  expanded?: MeasurementUncertainty,
): ComputedValue {
  return conductionVelocity({
    distanceMm: proximal.distanceMm - distal.distanceMm,
    proximalLatencyMs: proximal.onsetLatencyMs,
    distalLatencyMs: distal.onsetLatencyMs,
  }, expanded && { ...expanded, distanceMm: Math.SQRT2 * expanded.distanceMm })
}
