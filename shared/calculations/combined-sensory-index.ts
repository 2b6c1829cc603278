import { notComputable, valueOf } from './computed-value'
import type { ComputedValue } from './types'
import { latencySumUncertainty } from './uncertainty'

/**
 * Combined sensory index: the sum of three signed differences of peak latency, in ms.
 *
 * index = palm (median - ulnar, 80 mm, orthodromic) + ring finger (median - ulnar, 140 mm) + thumb (median - radial,
 * 100 mm). Not computable unless all three are numbers.
 *
 * Source: Lew HL et al., Muscle Nerve 2000;23:1261-1264 (distances and directions read); Robinson LR, Micklesen PJ,
 * Wang L, Muscle Nerve 1998;21:1166-1171 (abstract read). The sum is compared with a tolerance, so that
 * 0.2 + 0.4 + 0.3 is not above 0.9.
 *
 * @example
 * combinedSensoryIndex({ palm: valueOf(0.2), ring: valueOf(0.4), thumb: valueOf(0.3) }, 0.1)
 * // => { kind: 'value', value: 0.9, uncertainty: 0.24 } (ms)
 */
export function combinedSensoryIndex(differences: { palm: ComputedValue, ring: ComputedValue, thumb: ComputedValue }, latencyMs: number): ComputedValue {
  const { palm, ring, thumb } = differences
  const missing = Object.entries(differences).filter(([, value]) => value.kind !== 'value').map(([name]) => `${names[name as keyof typeof names]} difference`)
  if (palm.kind !== 'value' || ring.kind !== 'value' || thumb.kind !== 'value') return notComputable(`no ${missing.join(', no ')}`)
  return valueOf(palm.value + ring.value + thumb.value, latencySumUncertainty(6, latencyMs))
}

const names = { palm: 'palm', ring: 'ring finger', thumb: 'thumb' } as const
