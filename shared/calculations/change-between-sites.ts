import { notComputable, valueOf } from './computed-value'
import type { ComputedValue } from './types'

/**
 * Fall of amplitude or area from a distal to a proximal site, in per cent; negative when the proximal one is larger.
 *
 * fall = 100 x (1 - proximal / distal), negative-peak measures.
 * Source: read in EFNS/PNS criteria (PMC8108415, footnote of table 2).
 *
 * @example
 * fallPercent({ distal: 6.4, proximal: 5.0 }) // => { kind: 'value', value: 21.875 } (%)
 */
export function fallPercent(pair: { distal: number, proximal: number }): ComputedValue {
  if (!(pair.distal > 0)) return notComputable('the distal value is not above 0')
  return valueOf(100 * (1 - pair.proximal / pair.distal))
}

/**
 * Rise of the negative-peak duration from a distal to a proximal site, in per cent.
 *
 * rise = 100 x (proximal / distal - 1). Source: as fallPercent.
 *
 * @example
 * risePercent({ distal: 5.4, proximal: 5.6 }) // => { kind: 'value', value: 3.70… } (%)
 */
export function risePercent(pair: { distal: number, proximal: number }): ComputedValue {
  if (!(pair.distal > 0)) return notComputable('the distal value is not above 0')
  return valueOf(100 * (pair.proximal / pair.distal - 1))
}

/**
 * Ratio of the proximal to the distal amplitude. Source: as fallPercent.
 *
 * @example
 * amplitudeRatio({ distal: 6.4, proximal: 5.0 }) // => { kind: 'value', value: 0.78125 }
 */
export function amplitudeRatio(pair: { distal: number, proximal: number }): ComputedValue {
  if (!(pair.distal > 0)) return notComputable('the distal value is not above 0')
  return valueOf(pair.proximal / pair.distal)
}
