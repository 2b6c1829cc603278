import { shareOf } from './criteria'
import type { Facts } from './facts'
import { allOf, anyOf, joined, notAssessable, passes, printBeside, type Bar, type Finding, type Truth } from './finding'
import type { MotorRun } from './motor-nerves'
import type { Change, SitePair } from './site-pairs'

/**
 * Rules on the change of the motor response between two sites, EFNS/PNS 2010 on multifocal motor neuropathy: negative
 * peak, area in per cent.
 */
const areaHalf: Bar = { op: 'at-least', value: 50 }
const areaThird: Bar = { op: 'at-least', value: 30 }
const riseSmall: Bar = { op: 'at-most', value: 30 }
const riseLarge: Bar = { op: 'above', value: 30 }

const truthOf = (change: Change, bar: Bar): Truth => change.state === 'missing' ? 'not-assessable' : passes(change.percent, bar) ? 'met' : 'not-met'

/** A rule on one pair; the words are made for the pairs that are shown. */
export interface PairRule {
  of: (pair: SitePair) => Truth
  because: (pair: SitePair) => string
  words: (pair: SitePair) => string
}

/** Definite: area falls by half or more, duration rises by 30 % at most, distal amplitude above 1 mV and above 20 % of its lower limit. */
export function definiteIn(facts: Facts, run: MotorRun): PairRule {
  return {
    of: pair => allOf([truthOf(pair.areaFall, areaHalf), truthOf(pair.durationRise, riseSmall), largeEnough(facts, run, pair).result]),
    because: pair => joined([pair.areaFall.because, pair.durationRise.because, largeEnough(facts, run, pair).because]),
    words: pair => joined([changeWords('area fall', pair.areaFall, areaHalf), changeWords('duration rise', pair.durationRise, riseSmall), distalWords(pair)]).replaceAll('; ', ', '),
  }
}

const oneMillivolt: Bar = { op: 'above', value: 1 }

const distalWords = ({ distalAmplitude }: SitePair) => distalAmplitude.state === 'number' ? `distal ${printBeside(distalAmplitude.value, 1, oneMillivolt)} mV` : ''

/** The amplitude at the distal site of the pair; its lower limit is that of the distal site of the nerve. */
function largeEnough(facts: Facts, run: MotorRun, { distalAmplitude }: SitePair): { result: Truth, because: string } {
  if (distalAmplitude.state !== 'number') return { result: 'not-assessable', because: `distal amplitude ${distalAmplitude.because}` }
  if (!passes(distalAmplitude.value, oneMillivolt)) return { result: 'not-met', because: '' }
  const share = shareOf(facts, run.amplitude, 'lower')
  if (typeof share === 'string') return { result: 'not-assessable', because: `amplitude: ${share}` }
  const isLarge = share.limit > 0 && passes(distalAmplitude.value, { op: 'above', value: share.limit * 0.2 })
  return { result: isLarge ? 'met' : 'not-met', because: '' }
}

/**
 * Probable at least: area falls by 30 % or more over a long segment of the arm while the duration rises by 30 % at most,
 * or it falls by half or more, whatever the duration does (then it is definite or probable).
 */
export function probableIn(isArm: boolean): PairRule {
  return {
    of: pair => anyOf([
      isArm && isLongSegment(pair) ? allOf([truthOf(pair.areaFall, areaThird), truthOf(pair.durationRise, riseSmall)]) : 'not-met',
      truthOf(pair.areaFall, areaHalf),
    ]),
    because: pair => joined([pair.areaFall.because, pair.durationRise.because]),
    words: pair => joined([changeWords('area fall', pair.areaFall, isLongSegment(pair) ? areaThird : areaHalf), changeWords('duration rise', pair.durationRise, riseSmall)]).replace('; ', ', '),
  }
}

const atWrist = ['wrist', 'forearm']
const atElbow = ['elbow', 'below-elbow', 'above-elbow']
/** Wrist to elbow, or elbow to axilla. */
const isLongSegment = ({ from, to }: SitePair) => (atWrist.includes(from.id) && atElbow.includes(to.id)) || (atElbow.includes(from.id) && to.id === 'axilla')

/** Dispersion: the negative peak gets longer by more than 30 %. */
export const dispersion: PairRule = {
  of: pair => truthOf(pair.durationRise, riseLarge),
  because: pair => pair.durationRise.because,
  words: pair => changeWords('duration rise', pair.durationRise, riseLarge),
}

/** Proximal to distal amplitude under 0.5, or under 0.36 where the distal amplitude is not above 1 mV. */
export const lowRatio: PairRule = {
  of: (pair) => {
    const isKnown = pair.amplitudeFall.state === 'number' && pair.distalAmplitude.state === 'number'
    return !isKnown ? 'not-assessable' : passes(ratioOf(pair), ratioBar(pair)) ? 'met' : 'not-met'
  },
  because: ({ amplitudeFall, distalAmplitude }) => amplitudeFall.because || (distalAmplitude.state === 'number' ? '' : `distal amplitude ${distalAmplitude.because}`),
  words: (pair) => {
    const bar = ratioBar(pair)
    return `ratio ${printBeside(ratioOf(pair), 2, bar)}, limit ${bar.value} at ${printBeside(pair.distalAmplitude.value, 1, oneMillivolt)} mV`
  },
}

const ratioOf = ({ amplitudeFall }: SitePair) => 1 - amplitudeFall.percent / 100
const ratioBar = ({ distalAmplitude }: SitePair): Bar => ({ op: 'below', value: passes(distalAmplitude.value, oneMillivolt) ? 0.5 : 0.36 })

function changeWords(what: string, change: Change, bar: Bar): string {
  return change.state === 'number' ? `${what} ${printBeside(change.percent, 0, bar)} %` : ''
}

/** Asks each pair; those that are met stand for the nerve, else all that are open, else the pair with the greatest fall. */
export function overPairs(pairs: readonly SitePair[], rule: PairRule): Finding {
  const truths = pairs.map(pair => rule.of(pair))
  const result = anyOf(truths)
  if (result === 'not-assessable') return notAssessable(joined(pairs.map((pair, index) => truths[index] === 'not-assessable' ? rule.because(pair) : '')))
  const shown = result === 'met' ? pairs.filter((_, index) => truths[index] === 'met') : [pairs.reduce((most, one) => sizeOf(one) > sizeOf(most) ? one : most)]
  return { result, numbers: joined(shown.map(pair => `${pair.label}: ${rule.words(pair)}`)) }
}

const sizeOf = ({ areaFall, amplitudeFall }: SitePair) => areaFall.state === 'number' ? areaFall.percent : amplitudeFall.state === 'number' ? amplitudeFall.percent : Number.NEGATIVE_INFINITY
