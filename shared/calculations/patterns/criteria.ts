import { quantityInfo, decimalsFor } from '../quantity-info'
import { printLimit, roundForPrint } from '../round-for-print'
import { limitOf, type Facts, type Reading } from './facts'
import { decided, met, notAssessable, passes, plainNumber, printBeside, type Bar, type Finding } from './finding'

/** Small rules on one reading; the sets are made of them. */
const infoOf = (reading: Reading) => quantityInfo(reading.result?.quantity ?? '')
const withUnit = (text: string, unit: string) => unit ? `${text} ${unit}` : text

/**
 * The value against a fixed bar of the source.
 *
 * @example
 * againstBar(latency, { op: 'above', value: 6.5 }) // => { result: 'met', numbers: '6.8 ms' }
 */
export function againstBar(reading: Reading, bar: Bar): Finding {
  if (reading.state !== 'number') return notAssessable(reading.because)
  const { unit } = infoOf(reading)
  return decided(passes(reading.value, bar), withUnit(printBeside(reading.value, decimalsOf(reading), bar), unit))
}

/** Decimals of a reading, one more for what prints whole: a criterion is looked at closely. */
function decimalsOf(reading: Reading): number {
  const info = infoOf(reading)
  return Math.max(1, decimalsFor(info, reading.value))
}

/**
 * Is the value beyond the limit of the sets in use? No response is beyond a lower limit of an amplitude when asked so.
 *
 * @example
 * beyondLimit(facts, latency, 'upper') // => { result: 'met', numbers: '5.2 ms, limit 4.5 ms' }
 */
export function beyondLimit(facts: Facts, reading: Reading, bound: 'upper' | 'lower', absentIsBeyond = false): Finding {
  if (reading.state === 'missing') return notAssessable(reading.because)
  if (reading.state === 'no-response') return absentIsBeyond ? met('no response') : notAssessable('no response')
  const limit = limitOf(facts, reading, bound)
  const info = infoOf(reading)
  if (typeof limit === 'string') return notAssessable(limit, withUnit(roundForPrint(reading.value, decimalsOf(reading)), info.unit))
  const bar: Bar = { op: bound === 'upper' ? 'above' : 'below', value: limit.value }
  return decided(passes(reading.value, bar), `${withUnit(printBeside(reading.value, decimalsOf(reading), bar), info.unit)}, limit ${withUnit(printLimit(limit.value, info.printDecimals), info.unit)}`)
}

/**
 * The value in per cent of the limit of the sets in use, against a bar in per cent. Compared on the unrounded product.
 *
 * @example
 * // latency 5.6 ms, upper limit 3.6 ms
 * percentOfOwnLimit(facts, latency, 'upper', { op: 'at-least', value: 150 }) // => { result: 'met', numbers: '5.6 ms, 156 % of 3.6 ms' }
 */
export function percentOfOwnLimit(facts: Facts, reading: Reading, bound: 'upper' | 'lower', percent: Bar): Finding {
  if (reading.state !== 'number') return notAssessable(reading.because)
  const share = shareOf(facts, reading, bound)
  if (typeof share === 'string') return notAssessable(share)
  return decided(passesShare(reading.value, share.limit, percent), shareWords(reading, share.limit, percent))
}

/** Passes the bar in per cent of a limit. */
export function passesShare(value: number, limit: number, percent: Bar): boolean {
  return passes(value, { op: percent.op, value: limit * percent.value / 100 })
}

/** "5.6 ms, 156 % of 3.6 ms". */
export function shareWords(reading: Reading, limit: number, percent: Bar): string {
  const { unit } = infoOf(reading)
  const share = printBeside(100 * reading.value / limit, 0, percent)
  return `${withUnit(roundForPrint(reading.value, decimalsOf(reading)), unit)}, ${share} % of ${withUnit(plainNumber(limit), unit)}`
}

/** The value and the limit it is a share of, or why there is none. No response is 0 % of a lower limit. */
export function shareOf(facts: Facts, reading: Reading, bound: 'upper' | 'lower'): { percent: number, limit: number } | string {
  if (reading.state === 'missing') return reading.because
  if (reading.state === 'no-response' && bound === 'lower') return { percent: 0, limit: 0 }
  if (reading.state === 'no-response') return reading.because
  const limit = limitOf(facts, reading, bound)
  if (typeof limit === 'string') return limit
  return limit.value > 0 ? { percent: 100 * reading.value / limit.value, limit: limit.value } : 'no limit: the limit is 0'
}
