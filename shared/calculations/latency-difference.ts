import { absentBecause, isNoResponse, notComputable, valueOf } from './computed-value'
import type { ComputedValue } from './types'
import { latencySumUncertainty } from './uncertainty'
import { absenceAt } from './words'

/**
 * Latency of the nerve in question minus that of the nerve it is compared with, in ms; the sign is kept.
 *
 * An absent response of the nerve in question beside a present comparison reads "no response", not a number; an absent
 * comparison is the reason why there is none. Source: comparison of median and ulnar, median and radial latencies over
 * equal distances: Lew HL et al., Muscle Nerve 2000;23:1261-1264 (read); the sign kept: Robinson 1998 (from memory).
 *
 * @example
 * latencyDifference({ kind: 'value', value: 3.8 }, { kind: 'value', value: 2.7 }, { latencyMs: 0.1, nameOfOther: 'ulnar' })
 * // => { kind: 'value', value: 1.1, uncertainty: 0.14 } (ms)
 */
export function latencyDifference(
  lead: ComputedValue,
  other: ComputedValue,
  context: { latencyMs: number, nameOfOther: string, nameOfLead?: string },
): ComputedValue {
  if (other.kind !== 'value') return notComputable(reasonOf(other, context.nameOfOther))
  if (isNoResponse(lead)) return absentBecause('no-response')
  if (lead.kind !== 'value') return notComputable(reasonOf(lead, context.nameOfLead ?? 'first'))
  return valueOf(lead.value - other.value, latencySumUncertainty(2, context.latencyMs))
}

function reasonOf(value: ComputedValue, name: string): string {
  if (value.kind === 'absent') return `${name}: ${absenceAt[value.absence]}`
  return value.kind === 'not-computable' ? `${name}: ${value.because}` : ''
}
