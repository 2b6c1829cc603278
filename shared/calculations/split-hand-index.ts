import { isNoResponse, notComputable, valueOf } from './computed-value'
import type { ComputedValue } from './types'

/** Stands for an absent response of the little finger muscle, so that nothing is divided by zero. */
const ABSENT_ADM_MV = 0.1

/**
 * Split-hand index, in mV.
 *
 * index = APB amplitude x FDI amplitude / ADM amplitude. APB or FDI absent: 0. ADM absent: 0.1 mV stands for it.
 * Source: Neurol Int 2022;14:707-715, doi:10.3390/neurolint14030059 (read, the rule for absent responses too).
 *
 * @example
 * splitHandIndex({ apb: valueOf(6), fdi: valueOf(9), adm: valueOf(9) }) // => { kind: 'value', value: 6 } (mV)
 */
export function splitHandIndex(amplitudes: { apb: ComputedValue, fdi: ComputedValue, adm: ComputedValue }): ComputedValue {
  const { apb, fdi, adm } = amplitudes
  const divisor = isNoResponse(adm) ? ABSENT_ADM_MV : adm.kind === 'value' ? adm.value : null
  if (divisor === null) return notComputable('no abductor digiti minimi amplitude')
  if (!(divisor > 0)) return notComputable('the abductor digiti minimi amplitude is not above 0')
  const thenar = isNoResponse(apb) ? 0 : apb.kind === 'value' ? apb.value : null
  const interosseous = isNoResponse(fdi) ? 0 : fdi.kind === 'value' ? fdi.value : null
  if (thenar === null) return notComputable('no abductor pollicis brevis amplitude')
  if (interosseous === null) return notComputable('no first dorsal interosseous amplitude')
  return valueOf(thenar * interosseous / divisor)
}
