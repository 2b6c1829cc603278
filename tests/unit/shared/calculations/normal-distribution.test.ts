import fc from 'fast-check'
import jstat from 'jstat'
import { describe, expect, it } from 'vitest'
import { atLeastOfTrials, binomialAtLeast, binomialProbability, normalCumulative, normalQuantile } from '#shared/calculations/normal-distribution'

const { jStat } = jstat

describe('normal distribution, against jstat', () => {
  it.each([-8, -5, -3.6, -3.5, -3.4, -2, -1.96, -1.645, -1, -0.1, 0, 0.1, 1, 1.8808, 2, 3.49, 3.51, 6])('Phi(%f)', (z) => {
    expect(normalCumulative(z)).toBeCloseTo(jStat.normal.cdf(z, 0, 1), 12)
  })

  it.each([0.001, 0.01, 0.02275, 0.025, 0.03, 0.05, 0.1, 0.5, 0.9, 0.95, 0.97, 0.975, 0.999])('quantile of %f', (p) => {
    expect(normalQuantile(p)).toBeCloseTo(jStat.normal.inv(p, 0, 1), 7)
  })

  /** Printed tables of the normal distribution (derived): 5th, 3rd, 2.5th and 1st percentile. */
  it.each([{ z: -1.645, percentile: 5 }, { z: -1.881, percentile: 3 }, { z: -1.96, percentile: 2.5 }, { z: -2, percentile: 2.28 }, { z: -2.326, percentile: 1 }])('z $z is the $percentile percentile', ({ z, percentile }) => {
    expect(100 * normalCumulative(z)).toBeCloseTo(percentile, 2)
  })

  it('has no tail lost to rounding far below', () => {
    expect(normalCumulative(-10)).toBeGreaterThan(7e-24)
    expect(normalCumulative(-10)).toBeLessThan(8e-24)
  })

  it('quantile undoes the cumulative', () => {
    fc.assert(fc.property(fc.double({ min: -6, max: 6, noNaN: true }), (z) => {
      expect(normalQuantile(normalCumulative(z))).toBeCloseTo(z, 6)
    }))
  })

  it('rises and mirrors', () => {
    fc.assert(fc.property(fc.double({ min: -8, max: 8, noNaN: true }), fc.double({ min: 0.001, max: 2, noNaN: true }), (z, step) => {
      expect(normalCumulative(z + step)).toBeGreaterThanOrEqual(normalCumulative(z))
      expect(normalCumulative(z) + normalCumulative(-z)).toBeCloseTo(1, 12)
    }))
  })

  it.each([0, 1, -0.1, 1.1, NaN])('no quantile for %f', (p) => {
    expect(() => normalQuantile(p)).toThrow(RangeError)
  })
})

describe('binomial distribution, against jstat', () => {
  const trials = [1, 2, 5, 9, 10, 20, 30, 60]
  it.each(trials)('%i trials', (n) => {
    for (const p of [0.01, 0.025, 0.03, 0.05, 0.5]) {
      for (let k = 0; k <= Math.min(n, 8); k++) {
        expect(binomialProbability(k, n, p)).toBeCloseTo(jStat.binomial.pdf(k, n, p), 10)
        expect(binomialAtLeast(k, n, p)).toBeCloseTo(k === 0 ? 1 : 1 - jStat.binomial.cdf(k - 1, n, p), 10)
      }
    }
  })

  /** Derived: 1 - (1 - p)^n. */
  it.each([{ n: 10, p: 0.03, percent: 26.3 }, { n: 20, p: 0.025, percent: 39.7 }, { n: 30, p: 0.05, percent: 78.5 }])('one or more of $n at $p: $percent %', ({ n, p, percent }) => {
    expect(100 * binomialAtLeast(1, n, p)).toBeCloseTo(percent, 1)
  })

  it('takes certain and impossible events', () => {
    expect(binomialProbability(0, 5, 0)).toBe(1)
    expect(binomialProbability(1, 5, 0)).toBe(0)
    expect(binomialProbability(5, 5, 1)).toBe(1)
    expect(binomialProbability(4, 5, 1)).toBe(0)
    expect(binomialAtLeast(-1, 5, 0.5)).toBe(1)
  })

  it.each([[-1, 5, 0.5], [6, 5, 0.5], [1, 5, 1.5], [1, 5, NaN], [0.5, 5, 0.5], [1, 2.5, 0.5]])('refuses %f of %f at %f', (k, n, p) => {
    expect(() => binomialProbability(k, n, p)).toThrow(RangeError)
  })

  it('trials of one probability are the binomial', () => {
    fc.assert(fc.property(fc.integer({ min: 1, max: 40 }), fc.integer({ min: 0, max: 8 }), fc.double({ min: 0.001, max: 0.2, noNaN: true }), (n, k, p) => {
      expect(atLeastOfTrials(k, Array.from({ length: n }, () => p))).toBeCloseTo(k > n ? 0 : binomialAtLeast(k, n, p), 10)
    }))
  })

  it('unequal trials, by hand', () => {
    expect(atLeastOfTrials(1, [0.03, 0.05])).toBeCloseTo(1 - 0.97 * 0.95, 12)
    expect(atLeastOfTrials(2, [0.03, 0.05])).toBeCloseTo(0.0015, 12)
    expect(atLeastOfTrials(-1, [0.5])).toBe(1)
    expect(atLeastOfTrials(0, [])).toBe(1)
    expect(atLeastOfTrials(1, [])).toBe(0)
  })
})
