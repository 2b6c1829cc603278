export interface Tick { value: number, at: number }

/**
 * Round numbers from 0 upward that reach `largest` with four to eight ticks.
 *
 * @example axisTicks(9.2) // => { max: 10, values: [0, 2, 4, 6, 8, 10] }
 */
export function axisTicks(largest: number): { max: number, values: number[] } {
  const rough = Math.max(largest, 1e-6) / 6
  const decade = 10 ** Math.floor(Math.log10(rough))
  const step = [1, 2, 5, 10].map(factor => factor * decade).find(candidate => candidate >= rough) ?? 10 * decade
  const count = Math.ceil(largest / step - 1e-9)
  return { max: count * step, values: Array.from({ length: count + 1 }, (_, index) => index * step) }
}
