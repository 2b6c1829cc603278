/**
 * First-order propagation of uncertainty.
 *
 * Source: JCGM 100:2008, Guide to the expression of uncertainty in measurement, 5.1.2 (law of propagation for
 * uncorrelated inputs) and 6.2 (expanded uncertainty U = k u). All inputs and outputs here are expanded with the same
 * k = 2 (about 95 %), and since the law is homogeneous of degree one, k drops out. Clause numbers from memory.
 */

/** What the laboratory states for its distances and its latency cursors, expanded with k = 2. */
export interface MeasurementUncertainty { distanceMm: number, latencyMs: number }

/** One input: how much the result changes per unit of it, and its expanded uncertainty. */
export interface UncertainInput { sensitivity: number, expanded: number }

/**
 * Expanded uncertainty of a result of independent inputs: the root of the sum of (sensitivity x uncertainty) squared.
 *
 * @example
 * propagate([{ sensitivity: 1, expanded: 0.1 }, { sensitivity: -1, expanded: 0.1 }]) // => 0.1414… (ms)
 */
export function propagate(inputs: readonly UncertainInput[]): number {
  let sum = 0
  for (const { sensitivity, expanded } of inputs) sum += (sensitivity * expanded) ** 2
  return Math.sqrt(sum)
}

/**
 * Uncertainty of a velocity = distance / time, the time being read with one cursor (sensory) or two (motor, segment).
 *
 * U(v) / v = sqrt((U(d) / d)^2 + cursors (U(t) / t)^2)
 *
 * Worked: 250 mm in 5.0 ms with 5 mm and 0.1 ms at each of two cursors: 3.46 % of 50 m/s, that is 1.7 m/s (F1.5 of
 * the formula collection, derived).
 *
 * @example
 * velocityUncertainty({ velocityMps: 50, distanceMm: 250, timeMs: 5, cursors: 2 }, { distanceMm: 5, latencyMs: 0.1 }) // => 1.73
 */
export function velocityUncertainty(
  velocity: { velocityMps: number, distanceMm: number, timeMs: number, cursors: 1 | 2 },
  expanded: MeasurementUncertainty,
): number {
  const ofDistance = expanded.distanceMm / velocity.distanceMm
  const ofTime = expanded.latencyMs / velocity.timeMs
  return velocity.velocityMps * Math.sqrt(ofDistance * ofDistance + velocity.cursors * ofTime * ofTime)
}

/**
 * Uncertainty of the fall of velocity from one motor segment to the next. Both segments share the latency between
 * them, so they are not independent: a late cursor there makes one slower and the other faster.
 *
 * d = v1 - v2, v1 = D1 / (L2 - L1), v2 = D2 / (L3 - L2); the sensitivity to L2 is -(v1 / t1) - (v2 / t2).
 *
 * @example
 * velocityDropUncertainty({ velocityMps: 60, distanceMm: 240, timeMs: 4 }, { velocityMps: 50, distanceMm: 100, timeMs: 2 }, { distanceMm: 5, latencyMs: 0.1 })
 */
export function velocityDropUncertainty(
  distal: { velocityMps: number, distanceMm: number, timeMs: number },
  proximal: { velocityMps: number, distanceMm: number, timeMs: number },
  expanded: MeasurementUncertainty,
): number {
  const ofDistal = distal.velocityMps / distal.timeMs
  const ofProximal = proximal.velocityMps / proximal.timeMs
  return propagate([
    { sensitivity: 1 / distal.timeMs, expanded: expanded.distanceMm },
    { sensitivity: 1 / proximal.timeMs, expanded: expanded.distanceMm },
    { sensitivity: ofDistal, expanded: expanded.latencyMs },
    { sensitivity: ofDistal + ofProximal, expanded: expanded.latencyMs },
    { sensitivity: ofProximal, expanded: expanded.latencyMs },
  ])
}

/**
 * Uncertainty of a sum or difference of `count` independently read latencies.
 *
 * @example
 * latencySumUncertainty(2, 0.1) // => 0.1414… (ms)
 */
export function latencySumUncertainty(count: number, latencyMs: number): number {
  return Math.sqrt(count) * latencyMs
}
