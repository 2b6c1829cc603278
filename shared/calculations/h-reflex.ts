import { notComputable, valueOf } from './computed-value'
import type { ComputedValue } from './types'

/**
 * Expected H-reflex latency of the soleus in an adult.
 *
 * latency (ms) = 9.14 + 0.46 x leg length (cm) + 0.1 x age (years); the length runs from the popliteal crease to the
 * medial malleolus. Source: Braddom RL, Johnson EW, Arch Phys Med Rehabil 1974;55:161-166, from memory; the usual
 * allowance of 5.5 ms above it is from memory with low confidence and is not applied.
 *
 * @example
 * expectedHLatency({ legLengthMm: 400, ageYears: 50 }) // => { kind: 'value', value: 32.54 } (ms)
 */
export function expectedHLatency(input: { legLengthMm: number, ageYears: number | null }): ComputedValue {
  if (input.ageYears === null) return notComputable('age missing')
  if (input.legLengthMm <= 0) return notComputable('the leg length is not above 0')
  return valueOf(9.14 + 0.46 * input.legLengthMm / 10 + 0.1 * input.ageYears)
}

/**
 * H to M ratio: largest H amplitude over largest M amplitude, a pure number. Source: common practice.
 *
 * @example
 * hmRatio({ hAmplitudeMv: 3, mAmplitudeMv: 12 }) // => { kind: 'value', value: 0.25 }
 */
export function hmRatio(input: { hAmplitudeMv: number, mAmplitudeMv: number }): ComputedValue {
  if (!(input.mAmplitudeMv > 0)) return notComputable('the M amplitude is not above 0')
  return valueOf(input.hAmplitudeMv / input.mAmplitudeMv)
}
