import type { Side } from '#shared/schemas/common'
import type { LimbTemperature } from '#shared/schemas/study'

/**
 * Nerves need longer than skin: a fixed time under the blanket brought all into range, stopping at 34 °C of the skin did
 * not. Drenthen et al., J Clin Neurophysiol 2008;25:104-110 (read).
 */
export const WARMING_MINUTES = 25
export const WARMING_TEXT = 'Warm under the blanket, then measure and record again.'

/** One limb that is being warmed. Kept in this browser only; it holds no word about the patient. */
export interface Warming { segment: LimbTemperature['segment'], side: Side, startedAt: string, minutes: number, text: string }

const limb = ({ segment, side }: Pick<Warming, 'segment' | 'side'>) => `${side}-${segment}`
export const sameLimb = (a: Pick<Warming, 'segment' | 'side'>, b: Pick<Warming, 'segment' | 'side'>) => limb(a) === limb(b)

/** Starts a limb's clock; one that runs already begins anew. */
export function startWarming(list: readonly Warming[], next: Warming): Warming[] {
  return [...list.filter(each => !sameLimb(each, next)), next]
}

/** Milliseconds left; negative when the time is over. @example timeLeft(warming, Date.now()) */
export const timeLeft = ({ startedAt, minutes }: Warming, now: number) => Date.parse(startedAt) + minutes * 60_000 - now

/** "18:04 left", "over since 2 min". @example leftWords(90_000) // => '1:30 left' */
export function leftWords(milliseconds: number): string {
  if (milliseconds <= 0) {
    const minutes = Math.floor(-milliseconds / 60_000)
    return minutes < 1 ? 'time is over' : `time is over since ${minutes} min`
  }
  const seconds = Math.ceil(milliseconds / 1000)
  return `${Math.floor(seconds / 60)}:${String(seconds % 60).padStart(2, '0')} left`
}
