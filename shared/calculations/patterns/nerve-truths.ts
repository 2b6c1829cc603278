import { joined, type Finding } from './finding'
import type { MotorNerve } from './motor-nerves'

/**
 * What one nerve says about one rule. 'left-out': it has no part in it (not recorded, no response where the rule needs a
 * latency, an entrapment site left out), as if it had not been studied. 'unknown': it would have a part, but cold, a
 * missing limit or a missing item keeps it from being judged.
 */
export interface NerveTruth { state: 'met' | 'not-met' | 'unknown' | 'left-out', words: string }
export type NerveRule = (nerve: MotorNerve) => NerveTruth

export const leftOut = (words = ''): NerveTruth => ({ state: 'left-out', words })
export const unknown = (words: string): NerveTruth => ({ state: 'unknown', words })
export const nerveIs = (isMet: boolean, words: string): NerveTruth => ({ state: isMet ? 'met' : 'not-met', words })

/** A finding on one reading as what the nerve says: without a response, or never recorded, it has no part in the rule. */
export function fromFinding(finding: Finding): NerveTruth {
  if (finding.result !== 'not-assessable') return { state: finding.result, words: finding.numbers }
  const because = finding.because ?? ''
  if (because.startsWith('no response')) return leftOut(because)
  return because === 'not recorded' ? leftOut() : unknown(because)
}

const order = ['met', 'unknown', 'not-met', 'left-out'] as const

/**
 * Any of several readings of one nerve: met before unknown before not met. The words are those of the parts that decided.
 *
 * @example
 * anyTruth([{ state: 'not-met', words: '54 m/s' }, { state: 'met', words: '30 m/s' }]).words // => '30 m/s'
 */
export function anyTruth(truths: readonly NerveTruth[]): NerveTruth {
  if (truths.length === 1 && truths[0]) return truths[0]
  const state = order.find(one => truths.some(truth => truth.state === one)) ?? 'left-out'
  return { state, words: joined(truths.filter(truth => truth.state === state).map(truth => truth.words)) }
}

/** One rule asked of every nerve. */
export type RuleTable = ReadonlyMap<MotorNerve, NerveTruth>
export const askEach = (nerves: readonly MotorNerve[], rule: NerveRule): RuleTable => new Map(nerves.map(nerve => [nerve, rule(nerve)]))

/** Does this nerve count for this rule? Asked once with the unknown counted as no, once as yes. */
export type Holds = (table: RuleTable, nerve: MotorNerve) => boolean

/**
 * A rule on several nerves. Every rule here can only gain from a nerve that counts, so it is met when it is met without
 * the unknown ones, not met when it is not met with them, and open between.
 *
 * @param needed how many nerves have to have a part in it at all
 * @param nothing what is said when no nerve has a part in it
 */
export function decideNerves(table: RuleTable, needed: number, rule: (holds: Holds) => boolean, nothing = ''): Finding {
  const words = nerveWords(table, ['met', 'not-met'])
  if (rule((one, nerve) => one.get(nerve)?.state === 'met')) return { result: 'met', numbers: words }
  if (countOf(table, ['met', 'not-met', 'unknown']) < needed) return { result: 'not-assessable', numbers: words, because: tooFew(table, needed, nothing) }
  const isOpen = rule((one, nerve) => mayCount(one.get(nerve)))
  if (!isOpen) return { result: 'not-met', numbers: words }
  return { result: 'not-assessable', numbers: words, because: nerveWords(table, ['unknown']) || 'depends on another criterion that could not be assessed' }
}

const mayCount = (truth: NerveTruth | undefined) => truth?.state === 'met' || truth?.state === 'unknown'

function countOf(table: RuleTable, states: readonly NerveTruth['state'][]): number {
  let count = 0
  for (const truth of table.values()) if (states.includes(truth.state)) count += 1
  return count
}

function tooFew(table: RuleTable, needed: number, nothing: string): string {
  const count = countOf(table, ['met', 'not-met', 'unknown'])
  const reasons = nerveWords(table, ['unknown', 'left-out'])
  if (count === 0) return reasons || nothing || 'not recorded in any nerve'
  return joined([`${count === 1 ? '1 nerve' : `${count} nerves`} only could be looked at, ${needed} needed`, reasons])
}

/** "RIGHT ulnar 5.6 ms, 156 % of 3.6 ms; LEFT tibial 6.2 ms, 103 % of 6 ms": those that count first; the same reason of several nerves once. */
export function nerveWords(table: RuleTable, states: readonly NerveTruth['state'][]): string {
  const reasons: string[] = []
  const names: string[] = []
  for (const state of states) {
    for (const [nerve, truth] of table) {
      if (truth.state !== state || !truth.words) continue
      const place = reasons.indexOf(truth.words)
      if (place < 0) names[reasons.push(truth.words) - 1] = nerve.name
      else names[place] += `, ${nerve.name}`
    }
  }
  return reasons.map((words, place) => `${names[place]} ${words}`).join('; ')
}

/** The nerves for which a rule is met. */
export function metIn(table: RuleTable): MotorNerve[] {
  const nerves: MotorNerve[] = []
  for (const [nerve, truth] of table) if (truth.state === 'met') nerves.push(nerve)
  return nerves
}

/** Their names. */
export const namesMet = (table: RuleTable): string => metIn(table).map(nerve => nerve.name).join(', ')

/** Does any nerve say so? */
export function hasState(table: RuleTable, state: NerveTruth['state']): boolean {
  for (const truth of table.values()) if (truth.state === state) return true
  return false
}

/**
 * Is there a group of at least `count` nerves for which the first rule holds and, beside them, another nerve for which
 * one of the others holds?
 */
export function withOther(nerves: readonly MotorNerve[], count: number, isMain: (nerve: MotorNerve) => boolean, isOther: (nerve: MotorNerve) => boolean): boolean {
  const main = nerves.filter(isMain)
  return nerves.some(other => isOther(other) && main.filter(nerve => nerve !== other).length >= count)
}
