import { notComputable, valueOf } from './computed-value'
import type { Entry } from '../schemas/study'
import type { ComputedValue } from './types'

/** The response that is compared with the first: the fourth (some laboratories take the fifth). */
export const DECREMENT_RESPONSE = 4

/**
 * Decrement of a train of slow stimuli: fall from the first to the fourth response, in per cent; positive is a fall.
 *
 * decrement = 100 x (first - fourth) / first.
 * Source: fourth (or fifth) response: page of the Norwegian society on myasthenia (read); first against fourth, above
 * 10 %: Sayan et al. 2024 (abstract read).
 *
 * @example
 * decrement([8.0, 6.9, 6.4, 6.2, 6.3]) // => { kind: 'value', value: 22.5 } (%)
 */
export function decrement(amplitudesMv: readonly (Entry | undefined)[]): ComputedValue {
  const first = amplitudesMv[0]
  const fourth = amplitudesMv[DECREMENT_RESPONSE - 1]
  if (typeof first !== 'number' || typeof fourth !== 'number') return notComputable('first or fourth response missing')
  if (!(first > 0)) return notComputable('the first response is not above 0')
  return valueOf(100 * (first - fourth) / first)
}

/**
 * Does a train keep falling to its last response? A myasthenic train levels off or recovers after the fourth or fifth;
 * one that does not is rather an artefact. Said only of trains of at least six responses.
 * Source: pages of the Norwegian society on slow trains (read).
 *
 * @example
 * keepsFalling([8.0, 7.7, 7.4, 7.1, 6.8, 6.5, 6.2, 5.9]) // => true
 */
export function keepsFalling(amplitudesMv: readonly (Entry | undefined)[]): boolean {
  if (amplitudesMv.length < 6) return false
  return amplitudesMv.every((amplitude, index) => {
    const before = amplitudesMv[index - 1]
    return index === 0 || (typeof amplitude === 'number' && typeof before === 'number' && amplitude < before)
  })
}
