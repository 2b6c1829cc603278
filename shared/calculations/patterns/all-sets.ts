import type { Policy } from '../types'
import { blinkPattern } from './blink'
import { bland } from './bland'
import { changeBetweenSites } from './change-between-sites'
import { cidp2010 } from './cidp-2010'
import { cidp2021 } from './cidp-2021'
import { combinedIndex } from './combined-index'
import { myasthenicDecrement } from './decrement-pattern'
import { fibularKnee } from './fibular-knee'
import { gbsHadden } from './gbs-hadden'
import { gbsHo } from './gbs-ho'
import { gbsRajabally } from './gbs-rajabally'
import { lambertEaton } from './increment-pattern'
import { lengthDependent } from './length-dependent'
import { mmn2010 } from './mmn-2010'
import { padua } from './padua'
import type { PatternSet } from './pattern-set'
import { splitHand } from './split-hand'
import { suralRadial } from './sural-radial'
import { ulnarElbow, ulnarElbow1999 } from './ulnar-elbow'

/** Every set, in the order in which results are listed. To add one: its file and its line here. */
export const patternSets: readonly PatternSet[] = [
  bland, padua, combinedIndex,
  ulnarElbow, ulnarElbow1999, fibularKnee,
  changeBetweenSites, mmn2010,
  cidp2010, cidp2021,
  gbsHo, gbsHadden, gbsRajabally,
  lengthDependent, suralRadial,
  myasthenicDecrement, lambertEaton,
  splitHand, blinkPattern,
]

/**
 * Is a set in use? Sets that rest on memory are off until the medical director turns them on; any may be turned off.
 *
 * @example
 * isOn(cidp2021, defaultPolicy) // => false
 */
export function isOn(set: Pick<PatternSet, 'id' | 'basis'>, policy: Pick<Policy, 'patternsOn' | 'patternsOff'>): boolean {
  if (policy.patternsOff.includes(set.id)) return false
  return set.basis !== 'memory' || policy.patternsOn.includes(set.id)
}
