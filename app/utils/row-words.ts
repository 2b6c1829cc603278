import type { Result } from '#shared/calculations/types'
import { limitsOf, limitWords, markOf } from '#shared/plots/verdict-words'

const judged = (results: readonly Result[]) => results.filter(result => limitsOf(result.verdict).length > 0)

/** What the bar of a row shows: a flagged value first, then the velocity, then the first that is judged. */
export function barredResult(results: readonly Result[]): Result | undefined {
  const all = judged(results)
  return all.find(result => result.flagged) ?? all.find(result => result.quantity === 'velocityMps') ?? all[0]
}

const always: Record<string, string> = { latencyMs: 'latency', onsetLatencyMs: 'onset', peakLatencyMs: 'peak', amplitudeMv: 'amplitude', amplitudeUv: 'amplitude', velocityMps: '' }
const whenFlagged: Record<string, string> = { velocityDropMps: 'drop, m/s', velocityDropPercent: 'drop, %' }

/** A short name stays on one line with its limit, a long one may wrap. */
function shortLimit(result: Result): string {
  const name = always[result.quantity] ?? whenFlagged[result.quantity]
  const limit = limitWords(result).replaceAll(' ', '\u00A0')
  return name === undefined ? `${result.label} ${limit}` : `${name} ${limit}`.trim().replaceAll(' ', '\u00A0')
}

/** The limits of a row in words, or why there are none. @example rowLimits(results) // => 'latency ≤ 4.4, amplitude ≥ 4.1' */
export function rowLimits(results: readonly Result[]): string {
  const words = judged(results).filter(result => result.quantity in always || result.flagged).map(shortLimit)
  if (words.length > 0) return words.join(', ')
  const why = results.map(result => result.verdict).find(verdict => verdict.kind === 'not-judged' || verdict.kind === 'no-limit')
  return why && 'because' in why ? `${why.kind === 'no-limit' ? 'no limit' : 'not judged'}: ${why.because}` : ''
}

/** In a cold limb slowing says nothing, and what is normal may be masked. */
export function coldRow(results: readonly Result[]): string {
  const verdicts = results.map(result => result.verdict).filter(verdict => verdict.kind === 'cold')
  if (verdicts.length === 0) return ''
  return verdicts.some(verdict => verdict.wouldBe !== 'within') ? 'cold, not interpretable' : 'may be masked by cold'
}

/** What stands beside late responses, reflexes and trains, and its short name. The rest is in the explanation. */
const shown: Record<string, string> = {
  minimumLatencyMs: 'shortest', meanLatencyMs: 'mean', maximumLatencyMs: 'longest', persistencePercent: 'persistence', chronodispersionMs: 'chronodispersion',
  hmRatio: 'H/M', hExpectedMs: 'H expected', hLatencyMs: 'H', decrementPercent: 'decrement', incrementPercent: 'increment', r1Ms: 'R1', r2IpsilateralMs: 'R2 same side', r2ContralateralMs: 'R2 other side', r2DifferenceMs: 'R2 difference',
}

export interface ResultWord { key: string, words: string, limit: string, flagged: boolean, cold: boolean }

/**
 * The computed numbers of a late response, reflex or train, each in a few words, and the typed ones that have a limit.
 *
 * @example resultWords(results)[0]?.words // => 'persistence 80 %'
 */
export function resultWords(results: readonly Result[]): ResultWord[] {
  return results.filter(result => result.quantity in shown && (!result.typed || limitsOf(result.verdict).length > 0)).map((result) => {
    const value = result.value.kind === 'not-computable' ? `not computed: ${result.value.because}` : `${markOf(result)} ${result.print}${result.value.kind === 'value' && result.unit ? `\u00A0${result.unit}` : ''}`.trim()
    return { key: result.key, words: `${shown[result.quantity]} ${value}`, limit: limitsOf(result.verdict).length > 0 ? limitWords(result).replaceAll(' ', '\u00A0') : '', flagged: result.flagged, cold: result.verdict.kind === 'cold' }
  })
}
