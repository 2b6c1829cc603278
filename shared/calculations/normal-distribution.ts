/**
 * Normal and binomial probabilities. All functions return finite numbers for finite input, and take no other.
 */

/**
 * Cumulative standard normal distribution, Phi(z): probability of a value at or below z.
 *
 * Series for |z| < 3.5 (Abramowitz and Stegun, Handbook of Mathematical Functions, 1964, 26.2.11), continued fraction
 * beyond (26.2.14). Formulas from memory; checked against an independent library in the tests.
 *
 * @example
 * normalCumulative(-1.645) // => 0.04998…
 */
export function normalCumulative(z: number): number {
  if (Math.abs(z) >= 3.5) return z > 0 ? 1 - upperTail(z) : upperTail(-z)
  let term = z
  let sum = z
  for (let k = 3; Math.abs(term) > 1e-17 * Math.abs(sum); k += 2) {
    term *= z * z / k
    sum += term
  }
  return 0.5 + sum * density(z)
}

const density = (z: number): number => Math.exp(-z * z / 2) / Math.sqrt(2 * Math.PI)

/** Q(z) for z >= 3.5: density(z) / (z + 1/(z + 2/(z + 3/(z + …)))). */
function upperTail(z: number): number {
  let fraction = z
  for (let k = 60; k >= 1; k--) fraction = z + k / fraction
  return density(z) / fraction
}

/**
 * The z below which the proportion p lies. Bisection between -40 and 40, exact to double precision of `normalCumulative`.
 * p has to lie between 0 and 1, ends excluded; otherwise a RangeError.
 *
 * @example
 * normalQuantile(0.03) // => -1.8807…
 */
export function normalQuantile(p: number): number {
  if (!(p > 0 && p < 1)) throw new RangeError('The proportion must be between 0 and 1.')
  if (p > 0.5) return -normalQuantile(1 - p)
  let low = -40
  let high = 0
  for (let step = 0; step < 200 && low < high; step++) {
    const middle = (low + high) / 2
    if (middle === low || middle === high) break
    if (normalCumulative(middle) < p) low = middle
    else high = middle
  }
  return (low + high) / 2
}
