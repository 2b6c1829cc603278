import { isNoResponse, notComputable, valueOf } from './computed-value'
import type { ComputedValue } from './types'

/**
 * Sural over superficial radial sensory amplitude of the same side, recorded alike; a pure number.
 *
 * Not computable when the radial response is absent; 0 when the sural one is absent and the radial one present.
 * Source: Rutkove SB et al., Muscle Nerve 1997;20:1236-1241 (secondary source read); age-banded limits: Mansukhani K et
 * al., Ann Indian Acad Neurol 2020;23:255-260 (read). The rule for absent responses: F3.7 of the formula collection.
 *
 * @example
 * suralRadialRatio({ kind: 'value', value: 6 }, { kind: 'value', value: 20 }) // => { kind: 'value', value: 0.3 }
 */
export function suralRadialRatio(sural: ComputedValue, radial: ComputedValue): ComputedValue {
  if (isNoResponse(radial)) return notComputable('no radial response')
  if (radial.kind !== 'value') return notComputable('no radial amplitude')
  if (!(radial.value > 0)) return notComputable('the radial amplitude is not above 0')
  if (isNoResponse(sural)) return valueOf(0)
  if (sural.kind !== 'value') return notComputable('no sural amplitude')
  return valueOf(sural.value / radial.value)
}
