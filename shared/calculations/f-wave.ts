import { notComputable, valueOf } from './computed-value'
import type { ComputedValue } from './types'
import { propagate, type MeasurementUncertainty } from './uncertainty'

/** Time the impulse is taken to need for turning round at the spinal cord, ms. Source: Kimura 1974 (from memory); 1 ms read in Groppa et al., Clin Neurophysiol 2012;123:858-882. */
export const TURNAROUND_MS = 1
/** Responses needed before a spread of latencies says anything: number 7 of this project's decisions on numbers. */
export const RESPONSES_FOR_CHRONODISPERSION = 10

/**
 * Persistence: how many of the stimuli gave an F-wave, in per cent.
 * Source: definition read (radiology teaching page, textbook-derived notes).
 *
 * @example
 * persistence({ responses: 8, stimuli: 10 }) // => { kind: 'value', value: 80 } (%)
 */
export function persistence(counts: { responses: number, stimuli: number }): ComputedValue {
  if (!(counts.stimuli > 0)) return notComputable('no number of stimuli')
  if (counts.responses < 0 || counts.responses > counts.stimuli) return notComputable('more responses than stimuli')
  return valueOf(100 * counts.responses / counts.stimuli)
}

/**
 * Chronodispersion: longest minus shortest F latency, in ms. Refused under 10 responses.
 * Source: definition read (as persistence); 50 to 60 stimuli are needed for 80 % of the true value (Fisher MA, secondary
 * source read), so the number of responses is always said beside it.
 *
 * @example
 * chronodispersion({ minimumMs: 26.1, maximumMs: 29.3, responses: 16 }) // => { kind: 'value', value: 3.2 } (ms)
 */
export function chronodispersion(input: { minimumMs: number, maximumMs: number, responses: number | null }, expanded?: MeasurementUncertainty): ComputedValue {
  if (input.responses === null) return notComputable('number of responses missing')
  if (input.responses < RESPONSES_FOR_CHRONODISPERSION) return notComputable(`fewer than ${RESPONSES_FOR_CHRONODISPERSION} responses`)
  if (input.maximumMs < input.minimumMs) return notComputable('the longest latency is shorter than the shortest')
  return valueOf(input.maximumMs - input.minimumMs, expanded && Math.SQRT2 * expanded.latencyMs)
}

/**
 * F-wave velocity over the way to the spinal cord and back.
 *
 * velocity (m/s) = 2 x distance stimulus to spine (mm) / (shortest F latency - M latency - 1 (ms))
 *
 * Source: from memory (Kimura 1974); the 1 ms and PML = (F + M - 1) / 2 read in Groppa et al. 2012.
 *
 * @example
 * fWaveVelocity({ distanceMm: 650, minimumMs: 26, mLatencyMs: 3 }) // => { kind: 'value', value: 59.09… } (m/s)
 */
export function fWaveVelocity(input: { distanceMm: number, minimumMs: number, mLatencyMs: number }, expanded?: MeasurementUncertainty): ComputedValue {
  const timeMs = input.minimumMs - input.mLatencyMs - TURNAROUND_MS
  if (timeMs <= 0) return notComputable('the F latency is not longer than the M latency')
  if (input.distanceMm <= 0) return notComputable('the distance is not above 0')
  const velocity = 2 * input.distanceMm / timeMs
  return valueOf(velocity, expanded && propagate([
    { sensitivity: 2 / timeMs, expanded: expanded.distanceMm },
    { sensitivity: velocity / timeMs, expanded: expanded.latencyMs },
    { sensitivity: velocity / timeMs, expanded: expanded.latencyMs },
  ]))
}

/**
 * F estimate: the shortest F latency expected from the limb's own velocity.
 *
 * estimate (ms) = 2 x distance stimulus to spine (mm) / velocity (m/s) + 1 + distal motor latency (ms)
 *
 * A shortest F longer than this means more slowing above than below; slightly shorter is usual.
 * Source: read in textbook-derived study notes (F3.4 of the formula collection, with distances in cm and a factor 10).
 *
 * @example
 * fEstimate({ distanceMm: 600, velocityMps: 55, distalLatencyMs: 3.2 }) // => { kind: 'value', value: 26.01… } (ms)
 */
export function fEstimate(input: { distanceMm: number, velocityMps: number, distalLatencyMs: number }): ComputedValue {
  if (!(input.velocityMps > 0)) return notComputable('the velocity is not above 0')
  if (input.distanceMm <= 0) return notComputable('the distance is not above 0')
  return valueOf(2 * input.distanceMm / input.velocityMps + TURNAROUND_MS + input.distalLatencyMs)
}

/**
 * F ratio: conduction time above the stimulus over the time below it. With the stimulus at wrist or ankle it is the
 * modified F ratio.
 *
 * ratio = (F - M - 1) / (2 M). Source: from memory (Kimura).
 *
 * @example
 * fRatio({ minimumMs: 26, mLatencyMs: 3 }) // => { kind: 'value', value: 3.666… }
 */
export function fRatio(input: { minimumMs: number, mLatencyMs: number }): ComputedValue {
  if (!(input.mLatencyMs > 0)) return notComputable('the M latency is not above 0')
  return valueOf((input.minimumMs - input.mLatencyMs - TURNAROUND_MS) / (2 * input.mLatencyMs))
}

/**
 * Peripheral motor latency: spinal cord to muscle.
 *
 * latency (ms) = (F + M - 1) / 2. Source: read in a figure legend of Groppa S et al., Clin Neurophysiol
 * 2012;123:858-882, doi:10.1016/j.clinph.2012.01.010; the printed formula itself from memory.
 *
 * @example
 * peripheralMotorLatency({ minimumMs: 26, mLatencyMs: 3 }) // => { kind: 'value', value: 14 } (ms)
 */
export function peripheralMotorLatency(input: { minimumMs: number, mLatencyMs: number }): ComputedValue {
  return valueOf((input.minimumMs + input.mLatencyMs - TURNAROUND_MS) / 2)
}
