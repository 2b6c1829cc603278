import { notComputable, valueOf } from './computed-value'
import type { ComputedValue } from './types'
import { velocityDropUncertainty, type MeasurementUncertainty } from './uncertainty'

interface Segment { velocityMps: number, distanceMm: number, timeMs: number }

/**
 * How much slower a segment is than the one distal to it (across the elbow against the forearm), in m/s.
 * Source: the quantity that Buschbacher RM, Am J Phys Med Rehabil 1999;78(S):S9-S14 gives a limit for (read).
 *
 * @example
 * velocityDrop({ velocityMps: 57.4, distanceMm: 270, timeMs: 4.7 }, { velocityMps: 35.5, distanceMm: 110, timeMs: 3.1 }) // => 21.9 m/s
 */
export function velocityDrop(distal: Segment, proximal: Segment, expanded?: MeasurementUncertainty): ComputedValue {
  return valueOf(distal.velocityMps - proximal.velocityMps, expanded && velocityDropUncertainty(distal, proximal, expanded))
}

/**
 * The same in per cent of the distal segment's velocity.
 *
 * @example
 * velocityDropPercent(60, 48) // => { kind: 'value', value: 20 } (%)
 */
export function velocityDropPercent(distalMps: number, proximalMps: number): ComputedValue {
  if (!(distalMps > 0)) return notComputable('the velocity of the distal segment is not above 0')
  return valueOf(100 * (1 - proximalMps / distalMps))
}
