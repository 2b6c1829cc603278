import { describe, expect, it } from 'vitest'
import { isOutside, printLimit, roundBesideLimits, roundForPrint } from '#shared/calculations/round-for-print'

describe('the one rounding', () => {
  it.each<[number, number, string]>([
    [53.75, 0, '54'], [4.35, 1, '4.4'], [4.25, 1, '4.3'], [1.005, 2, '1.01'], [3.8 - 2.7, 1, '1.1'], [0.1 + 0.2, 1, '0.3'], [0.3 - 0.05, 1, '0.3'],
    [2.5, 0, '3'], [-2.5, 0, '-3'], [-0.04, 1, '0.0'], [-0.05, 1, '-0.1'], [0, 1, '0.0'], [0.5, 0, '1'], [0.49999, 0, '0'], [9.95, 1, '10.0'], [9.96, 1, '10.0'],
    [0.2, 0, '0'], [1234.5, 0, '1235'], [1e-7, 1, '0.0'], [99.999, 2, '100.00'], [0.045, 2, '0.05'],
  ])('%f to %i decimals prints %s', (value, decimals, expected) => expect(roundForPrint(value, decimals)).toBe(expected))

  it.each([Number.NaN, Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY])('%f has no print', value => expect(roundForPrint(value, 1)).toBe('not computable'))
  it('prints a number beyond all measures by its digits', () => expect(Number(roundForPrint(1.5e20, 0))).toBe(1.5e20))
})

describe('one decimal more where the print would contradict the verdict', () => {
  const upper = (value: number) => ({ bound: 'upper' as const, value })
  const lower = (value: number) => ({ bound: 'lower' as const, value })
  it.each([
    [50.6, 0, lower(51), '50.6'], [50.4, 0, lower(51), '50'], [51.2, 0, lower(51), '51'], [50.96, 0, lower(51), '50.96'],
    [4.44, 1, upper(4.4), '4.44'], [4.4, 1, upper(4.4), '4.4'], [50.4, 0, lower(50.2), '50.4'], [3.34, 1, upper(3.3), '3.34'], [0.9000000000000001, 1, upper(0.9), '0.9'],
  ])('%f to %i decimals beside %o prints %s', (value, decimals, limit, expected) => expect(roundBesideLimits(value, decimals, [limit])).toBe(expected))
  it('looks at every limit', () => expect(roundBesideLimits(50.6, 0, [lower(40), upper(50.5)])).toBe('51'))
  it('prints plainly without limits', () => expect(roundBesideLimits(50.6, 0, [])).toBe('51'))
})

describe('outside', () => {
  it.each([
    ['on an upper limit', 4.4, { bound: 'upper' as const, value: 4.4 }, false],
    ['on a lower limit', 51, { bound: 'lower' as const, value: 51 }, false],
    ['0.2 + 0.4 + 0.3 against 0.9', 0.2 + 0.4 + 0.3, { bound: 'upper' as const, value: 0.9 }, false],
    ['3.2 - 2.8 against 0.4', 3.2 - 2.8, { bound: 'upper' as const, value: 0.4 }, false],
    ['50.6 against 51', 50.6, { bound: 'lower' as const, value: 51 }, true],
    ['4.41 against 4.4', 4.41, { bound: 'upper' as const, value: 4.4 }, true],
  ])('%s', (_, value, limit, expected) => expect(isOutside(value, limit)).toBe(expected))
})

it.each([[4, 1, '4.0'], [3.3, 1, '3.3'], [42.42424, 0, '42.42'], [51, 0, '51'], [0.17, 1, '0.17']])('a limit of %f prints as %s', (value, decimals, expected) => {
  expect(printLimit(value, decimals as number)).toBe(expected)
})
