import { shareOf } from './criteria'
import { distalLatencyRule, fallRule, fLatencyRule, riseRule, velocityRule, type BandedBar } from './demyelination'
import type { Facts } from './facts'
import { criterion, joined, passes, printBeside, type Bar, type Criterion, type CriterionText, type Finding, type Truth } from './finding'
import type { MotorNerve } from './motor-nerves'
import { anyTruth, askEach, decideNerves, leftOut, nerveIs, unknown, type NerveTruth, type RuleTable } from './nerve-truths'

/** The features of demyelination of one set of criteria for Guillain-Barré syndrome, as data. */
export interface FeatureBars {
  velocity: BandedBar
  latency: BandedBar
  fLatency: BandedBar
  /** Duration rise from a distal to a proximal site, per cent. */
  rise?: Bar
  /** Amplitude fall, per cent, where the distal amplitude is at least this share of its lower limit. */
  fall?: { bar: Bar, amplitudeAtLeastPercent: number, withoutTibial: boolean }
}

/** Each feature asked of every nerve. */
export interface Features { velocity: RuleTable, latency: RuleTable, fLatency: RuleTable, rise: RuleTable, fall: RuleTable }

/**
 * Asks every nerve for every feature. With the setting on, segments across the elbow and the fibular head and the median
 * latency at the wrist are left out; with it off, all sites count.
 */
export function featuresOf(facts: Facts, nerves: readonly MotorNerve[], bars: FeatureBars): Features {
  const leaveOut = facts.input.policy.leaveOutEntrapmentSites
  const counts = (place: { entrapment: boolean }) => !leaveOut || !place.entrapment
  const none = askEach(nerves, () => leftOut())
  const { rise, fall } = bars
  return {
    velocity: askEach(nerves, velocityRule(facts, bars.velocity, counts)),
    latency: askEach(nerves, distalLatencyRule(facts, bars.latency, leaveOut ? 'left-out' : 'counts')),
    fLatency: askEach(nerves, fLatencyRule(facts, bars.fLatency)),
    rise: rise ? askEach(nerves, riseRule(facts, rise, counts)) : none,
    fall: fall ? askEach(nerves, fallRule(facts, { fall: fall.bar, amplitudeAtLeastPercent: fall.amplitudeAtLeastPercent, withoutTibial: fall.withoutTibial, pairCounts: counts })) : none,
  }
}

/** Any of these features in a nerve. */
export function anyFeature(tables: readonly RuleTable[], nerves: readonly MotorNerve[]): RuleTable {
  return askEach(nerves, nerve => anyTruth(tables.map(table => table.get(nerve) ?? leftOut())))
}

/** A feature in so many nerves. */
export function inNerves(table: RuleTable, nerves: readonly MotorNerve[], count: number, nothing = ''): Finding {
  return decideNerves(table, count, holds => nerves.filter(nerve => holds(table, nerve)).length >= count, nothing)
}

/** Distal amplitude of each nerve in per cent of its lower limit against a bar; no response is 0 %. */
export function amplitudeTable(facts: Facts, nerves: readonly MotorNerve[], bar: Bar): RuleTable {
  return askEach(nerves, nerve => amplitudeTruth(facts, nerve, bar))
}

function amplitudeTruth(facts: Facts, nerve: MotorNerve, bar: Bar): NerveTruth {
  return anyTruth(nerve.runs.map(({ amplitude }) => {
    if (amplitude.because === 'not recorded') return leftOut()
    const share = shareOf(facts, amplitude, 'lower')
    if (typeof share === 'string') return unknown(`amplitude: ${share}`)
    const words = amplitude.state === 'no-response' ? 'no response' : `amplitude ${printBeside(share.percent, 0, bar)} % of its lower limit`
    return nerveIs(passes(share.percent, bar), words)
  }))
}

/** No motor response to distal stimulation in any recording of the nerve. */
export const isInexcitable = (nerve: MotorNerve): boolean => nerve.runs.every(run => run.amplitude.state === 'no-response')

/** One feature by itself: in any nerve, with the numbers of every nerve. */
export function featureCriterion(text: CriterionText, table: RuleTable, nerves: readonly MotorNerve[]): Criterion {
  return criterion(text, inNerves(table, nerves, 1))
}

/** "Not met" only where every feature could be looked at in some nerve; otherwise it stays open. */
export function strictly(result: Truth, features: readonly Criterion[]): Truth {
  return result === 'not-met' && features.some(feature => feature.result === 'not-assessable') ? 'not-assessable' : result
}

/** A finding that is open says why: for want of a reason of its own, with those of what keeps it open. */
export function withReason(finding: Finding, parts: readonly Pick<Finding, 'result' | 'because'>[]): Finding {
  if (finding.result !== 'not-assessable' || finding.because) return finding
  return { ...finding, because: joined(parts.filter(part => part.result === 'not-assessable').map(part => part.because)) }
}

/** What a nerve says, as a truth: without a part in the rule it does not fulfil it. */
export function truthOf(table: RuleTable, nerve: MotorNerve): Truth {
  const state = table.get(nerve)?.state
  return state === 'met' ? 'met' : state === 'unknown' ? 'not-assessable' : 'not-met'
}
