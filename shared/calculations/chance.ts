import { roundForPrint } from './round-for-print'
import type { ChanceLine, Result } from './types'

const ASSUMPTION = 'Taken as if the values were independent of each other; values of one nerve are not quite.'

/**
 * How many of the limits applied would fall outside by chance in a healthy person, and how many did.
 *
 * A limit at the 3rd or 97th percentile is passed by 3 in 100 healthy people. Limits without a stated percentile are
 * left out of the reckoning, and so are absent responses and values in a cold limb.
 *
 * Source: Dorfman LJ, Robinson LR, AAEM minimonograph 47, Muscle Nerve 1997;20:4-14 (read: many independent measures
 * are a problem); the binomial sum is arithmetic (derived).
 *
 * @example
 * chanceOf(results).sentence // => '30 limits applied; about 0.9 would fall outside by chance in health. 6 do.'
 */
export function chanceOf(results: readonly Result[]): ChanceLine {
  const tails: number[] = []
  let unknown = 0
  let seen = 0
  for (const { verdict } of results) {
    if (verdict.kind !== 'within' && verdict.kind !== 'outside') continue
    for (const limit of verdict.limits) {
      if (limit.percentile === null) unknown += 1
      else tails.push(tailOf(limit.percentile))
    }
    if (verdict.kind === 'outside' && verdict.limit.percentile !== null) seen += 1
  }
  return chanceLine(tails, seen, unknown)
}

/** Share of healthy people beyond a percentile, whichever end it stands at. */
const tailOf = (percentile: number) => Math.min(percentile, 100 - percentile) / 100

function chanceLine(tails: readonly number[], seen: number, unknown: number): ChanceLine {
  const expected = tails.reduce((sum, tail) => sum + tail, 0)
  const counted = `${tails.length} ${tails.length === 1 ? 'limit' : 'limits'} applied; about ${roundForPrint(expected, 1)} would fall outside by chance in health. ${seen} ${seen === 1 ? 'does' : 'do'}.`
  const none = unknown > 0 ? 'No limit with a stated percentile was applied.' : 'No limit was applied.'
  return {
    limitsApplied: tails.length,
    expectedOutside: expected,
    seenOutside: seen,
    probabilityAtLeastSeen: probabilityAtLeast(tails, seen),
    assumption: ASSUMPTION,
    sentence: (tails.length > 0 ? counted : none) + (unknown > 0 && tails.length > 0 ? ` ${unknown} more without a stated percentile ${unknown === 1 ? 'is' : 'are'} not counted.` : ''),
  }
}

/**
 * Probability of at least `seen` successes in independent trials with these probabilities (binomial when they are alike).
 *
 * @example
 * probabilityAtLeast(Array.from({ length: 10 }, () => 0.03), 1) // => 0.2625…
 */
export function probabilityAtLeast(tails: readonly number[], seen: number): number {
  if (seen <= 0) return 1
  if (seen > tails.length) return 0
  // exactly[k]: probability of k successes so far; the last place gathers `seen` or more.
  const exactly = new Float64Array(seen + 1)
  exactly[0] = 1
  for (const tail of tails) {
    exactly[seen] = (exactly[seen] as number) + (exactly[seen - 1] as number) * tail
    for (let k = seen - 1; k > 0; k -= 1) exactly[k] = (exactly[k] as number) * (1 - tail) + (exactly[k - 1] as number) * tail
    exactly[0] = (exactly[0] as number) * (1 - tail)
  }
  return Math.min(1, exactly[seen] as number)
}
