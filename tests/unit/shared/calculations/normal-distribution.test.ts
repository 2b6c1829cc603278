import fc from 'fast-check'
import jstat from 'jstat'
import { describe, expect, it } from 'vitest'
import { normalCumulative, normalQuantile } from '#shared/calculations/normal-distribution'

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
