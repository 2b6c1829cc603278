import { notComputable, valueOf } from './computed-value'
import type { ComputedValue } from './types'

/**
 * Increment after exercise, or within a train of fast stimuli: rise from the first response before to the one after, in
 * per cent; 100 % is a doubling (some papers print the ratio instead: 200 %).
 *
 * increment = 100 x (after - before) / before.
 * Source: page of the Norwegian society (read); limits: Lipka AF et al., Muscle Nerve 2020, doi:10.1002/mus.26885 (read).
 *
 * @example
 * increment({ beforeMv: 1.0, afterMv: 2.0 }) // => { kind: 'value', value: 100 } (%)
 */
export function increment(pair: { beforeMv: number, afterMv: number }): ComputedValue {
  if (!(pair.beforeMv > 0)) return notComputable('the response before is not above 0')
  return valueOf(100 * (pair.afterMv - pair.beforeMv) / pair.beforeMv)
}
