import { passesShare, percentOfOwnLimit, shareOf, shareWords } from './criteria'
import type { Facts, Reading } from './facts'
import { passes, printBeside, type Bar } from './finding'
import type { LimbNerve, MotorNerve, MotorRun, SegmentFacts } from './motor-nerves'
import { anyTruth, fromFinding, leftOut, nerveIs, unknown, type NerveRule, type NerveTruth } from './nerve-truths'
import type { Change, SitePair } from './site-pairs'

/**
 * Per cent of a limit, with another bar where the distal amplitude is low: "below 90 % of the lower limit, below 85 % when
 * the amplitude is below 50 % of its lower limit".
 */
export interface BandedBar { op: Bar['op'], full: number, low?: number, /** Per cent of the lower limit of the amplitude under which `low` applies. */ lowBelow?: number }

/**
 * The reading against a banded bar. Where the amplitude or its limit is not known, it is decided all the same when both
 * bars agree.
 */
export function bandedShare(facts: Facts, reading: Reading, bound: 'upper' | 'lower', bar: BandedBar, amplitude: Reading): NerveTruth {
  const full: Bar = { op: bar.op, value: bar.full }
  if (bar.low === undefined || bar.lowBelow === undefined) return fromFinding(percentOfOwnLimit(facts, reading, bound, full))
  const low: Bar = { op: bar.op, value: bar.low }
  const share = shareOf(facts, reading, bound)
  if (typeof share === 'string' || reading.state !== 'number') return fromFinding(percentOfOwnLimit(facts, reading, bound, full))
  const amplitudeShare = shareOf(facts, amplitude, 'lower')
  const asFull = passesShare(reading.value, share.limit, full)
  const asLow = passesShare(reading.value, share.limit, low)
  if (typeof amplitudeShare === 'string') {
    if (asFull !== asLow) return unknown(`amplitude, which decides between ${bar.full} and ${bar.low} %: ${amplitudeShare}`)
    return nerveIs(asFull, shareWords(reading, share.limit, full))
  }
  const isLow = passes(amplitudeShare.percent, { op: 'below', value: bar.lowBelow })
  return nerveIs(isLow ? asLow : asFull, `${shareWords(reading, share.limit, isLow ? low : full)}${isLow ? ` (low amplitude: bar ${bar.low} %)` : ''}`)
}

/** Prolonged distal latency; `medianAtWrist` says what the median nerve's counts for. */
export function distalLatencyRule(facts: Facts, bar: BandedBar, medianAtWrist: 'counts' | 'left-out' | 'open'): NerveRule {
  return (nerve) => {
    if (nerve.nerve === 'median' && medianAtWrist === 'left-out') return leftOut('left out at the wrist')
    const truth = anyTruth(nerve.runs.map(run => bandedShare(facts, run.latency, 'upper', bar, run.amplitude)))
    const isOpen = nerve.nerve === 'median' && medianAtWrist === 'open' && truth.state === 'met'
    return isOpen ? unknown(`${truth.words}: not counted if from carpal tunnel syndrome`) : truth
  }
}

/** Slow motor conduction in any segment that counts. */
export function velocityRule(facts: Facts, bar: BandedBar, segmentCounts: (segment: SegmentFacts) => boolean): NerveRule {
  return (nerve) => {
    const truths: NerveTruth[] = []
    for (const run of nerve.runs) {
      if (run.facts.cold) truths.push(unknown(run.facts.cold))
      else for (const segment of run.segments) if (segmentCounts(segment)) truths.push(named(segment, bandedShare(facts, segment.velocity, 'lower', bar, run.amplitude)))
    }
    return anyTruth(truths)
  }
}

/** The long segments go without saying. */
const named = ({ id, label }: SegmentFacts, { state, words }: NerveTruth): NerveTruth =>
  ({ state, words: id === 'forearm' || id === 'leg' || words === '' ? words : `${label} ${words}` })

/** Late shortest F-wave. */
export function fLatencyRule(facts: Facts, bar: BandedBar): NerveRule {
  return (nerve) => {
    const [run] = nerve.runs
    if (!nerve.fWave || !run) return leftOut()
    return bandedShare(facts, nerve.fWave, 'upper', bar, run.amplitude)
  }
}

/** No F-wave although the distal amplitude is at least this share of its lower limit. */
export function fAbsentRule(facts: Facts, amplitudeAtLeastPercent: number): NerveRule {
  return (nerve) => {
    const [run] = nerve.runs
    if (!nerve.fWave || !run) return leftOut()
    if (nerve.fWave.state === 'missing') return unknown(nerve.fWave.because)
    if (nerve.fWave.state === 'number') return nerveIs(false, 'F-waves present')
    return whereAmplitude(facts, run, { op: 'at-least', value: amplitudeAtLeastPercent }, () => nerveIs(true, 'no F-wave'))
  }
}

/** Asks only where the distal amplitude is large enough; a nerve with a smaller one has no part in the rule. */
function whereAmplitude(facts: Facts, run: MotorRun, percent: Bar, then: () => NerveTruth): NerveTruth {
  const share = shareOf(facts, run.amplitude, 'lower')
  if (typeof share === 'string') {
    const truth = then()
    return truth.state === 'met' ? unknown(`${truth.words}; amplitude: ${share}`) : truth
  }
  if (!passes(share.percent, percent)) return leftOut(`distal amplitude ${printBeside(share.percent, 0, percent)} % of its lower limit`)
  return then()
}

export interface FallRule {
  /** Fall of the amplitude in per cent. */
  fall: Bar
  /** Another bar from the wrist to Erb's point. */
  toErb?: Bar
  amplitudeAtLeastPercent: number
  withoutTibial: boolean
  pairCounts: (pair: SitePair) => boolean
}

/** The amplitude falls from a distal to a proximal site. */
export function fallRule(facts: Facts, rule: FallRule): NerveRule {
  const size: Bar = { op: 'at-least', value: rule.amplitudeAtLeastPercent }
  const asked: ChangeRule = {
    what: 'amplitude fall', counts: rule.pairCounts, changeOf: pair => pair.amplitudeFall,
    barOf: pair => (pair.from.id === 'wrist' && pair.to.id === 'erb' && rule.toErb) || rule.fall,
  }
  return nerve => nerve.nerve === 'tibial' && rule.withoutTibial
    ? leftOut()
    : anyTruth(nerve.runs.map(run => run.facts.cold ? unknown(run.facts.cold) : whereAmplitude(facts, run, size, () => mostTelling(run, asked))))
}

/** The negative peak gets longer from a distal to a proximal site: dispersion. */
export function riseRule(facts: Facts, rise: Bar, pairCounts: (pair: SitePair) => boolean, byNerve: Partial<Record<LimbNerve, Bar>> = {}): NerveRule {
  return (nerve) => {
    const asked: ChangeRule = { what: 'duration rise', counts: pairCounts, changeOf: pair => pair.durationRise, barOf: () => byNerve[nerve.nerve] ?? rise }
    return anyTruth(nerve.runs.map(run => run.facts.cold ? unknown(run.facts.cold) : mostTelling(run, asked)))
  }
}

/** A change between two sites against a bar. */
interface ChangeRule {
  what: string
  counts: (pair: SitePair) => boolean
  changeOf: (pair: SitePair) => Change
  barOf: (pair: SitePair) => Bar
}

/** Met by any pair; otherwise the pair with the greatest change says how far from it the nerve is. */
function mostTelling(run: MotorRun, { what, counts, changeOf, barOf }: ChangeRule): NerveTruth {
  const pairs = run.pairs.filter(counts)
  const isMet = (pair: SitePair) => passes(changeOf(pair).percent, barOf(pair))
  const numbers = pairs.filter(pair => changeOf(pair).state === 'number').sort((a, b) => changeOf(b).percent - changeOf(a).percent)
  const telling = numbers.find(isMet) ?? numbers[0]
  const truth = telling ? nerveIs(isMet(telling), `${what} ${printBeside(changeOf(telling).percent, 0, barOf(telling))} %, ${telling.label}`) : leftOut()
  if (truth.state === 'met') return truth
  const gap = pairs.map(changeOf).find(change => change.state === 'missing')
  // Areas and durations that nobody typed are not recorded rather than in doubt.
  return gap && !gap.because.endsWith('not recorded') ? unknown(gap.because) : truth
}

/** Limits of the duration of the distal negative peak in ms, by low-frequency filter in Hz. */
export type DurationLimits = Readonly<Record<number, Partial<Record<LimbNerve, number>>>>

/** A long distal response; only where the low-frequency filter is known and has limits. */
export function durationRule(limits: DurationLimits, op: Bar['op']): NerveRule {
  return nerve => anyTruth(nerve.runs.slice(0, 1).map(run => durationOf(nerve, run, limits, op)))
}

function durationOf({ nerve }: MotorNerve, { duration, facts }: MotorRun, limits: DurationLimits, op: Bar['op']): NerveTruth {
  if (nerve === 'radial' || duration.because === 'not recorded' || duration.state === 'no-response') return leftOut()
  if (duration.state === 'missing') return unknown(duration.because)
  const hertz = facts.recorded?.lowFrequencyFilterHz
  if (hertz === undefined) return unknown('low-frequency filter not noted')
  const limit = limits[hertz]?.[nerve]
  if (limit === undefined) return unknown(`no published limit for a filter of ${hertz} Hz`)
  const bar: Bar = { op, value: limit }
  return nerveIs(passes(duration.value, bar), `${printBeside(duration.value, 1, bar)} ms, limit ${limit} ms at ${hertz} Hz`)
}

/** Segments and pairs that do not lie across a common entrapment site. */
export const segmentOutside = (segment: SegmentFacts) => !segment.entrapment
export const pairOutside = (pair: SitePair) => !pair.entrapment
