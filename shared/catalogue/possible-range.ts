import type { Quantity } from './quantities'
import type { StimulationSite } from './types'

/**
 * What a number can be at all, the one rule of grid, library and server: outside it an entry is stopped, inside it at most
 * questioned. A distance follows its segment, everything else its quantity (number 10 of the decisions on numbers).
 *
 * @returns undefined where nothing is ruled out
 * @example
 * possibleRange(quantities.distanceMm, siteOf('fibular-motor-edb', 'below-fibular-head')) // => { min: 60, max: 700 } (mm)
 */
export function possibleRange(quantity: Quantity, site?: StimulationSite): { min: number, max: number } | undefined {
  const segment = quantity.id === 'distanceMm' ? site?.segmentMm : undefined
  return segment ? { min: segment.possibleMin, max: segment.possibleMax } : quantity.possible
}
