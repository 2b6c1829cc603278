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

/** Definite: area falls by half or more, duration rises by 30 % at most, distal amplitude above 1 mV and above 20 % of its lower limit. */
export function definiteIn(facts: Facts, run: MotorRun, pair: SitePair): Finding {
  const area = truthOf(pair.areaFall, areaHalf)
  const rise = truthOf(pair.durationRise, riseSmall)
  const size = largeEnough(facts, run, pair)
  const result = allOf([area, rise, size.result])
  const numbers = joined([changeWords('area fall', pair.areaFall, areaHalf), changeWords('duration rise', pair.durationRise, riseSmall), size.numbers])
  if (result !== 'not-assessable') return { result, numbers }
  return notAssessable(joined([pair.areaFall.because, pair.durationRise.because, size.because]), numbers)
}

/** The amplitude at the distal site of the pair; its lower limit is that of the distal site of the nerve. */
function largeEnough(facts: Facts, run: MotorRun, { distalAmplitude }: SitePair): Finding {
  if (distalAmplitude.state !== 'number') return notAssessable(`distal amplitude ${distalAmplitude.because}`)
  const words = `distal ${printBeside(distalAmplitude.value, 1, { op: 'above', value: 1 })} mV`
  if (!passes(distalAmplitude.value, { op: 'above', value: 1 })) return { result: 'not-met', numbers: words }
  const share = shareOf(facts, run.amplitude, 'lower')
  if (typeof share === 'string') return notAssessable(`amplitude: ${share}`, words)
  const isLarge = share.limit > 0 && passes(distalAmplitude.value, { op: 'above', value: share.limit * 0.2 })
  return { result: isLarge ? 'met' : 'not-met', numbers: words }
}

/**
 * Probable at least: area falls by 30 % or more over a long segment of the arm while the duration rises by 30 % at most,
 * or it falls by half or more, whatever the duration does (then it is definite or probable).
 */
export function probableIn(pair: SitePair, isArm: boolean): Finding {
  const overLong = isArm && isLongSegment(pair) ? allOf([truthOf(pair.areaFall, areaThird), truthOf(pair.durationRise, riseSmall)]) : 'not-met'
  const result = anyOf([overLong, truthOf(pair.areaFall, areaHalf)])
  const numbers = joined([changeWords('area fall', pair.areaFall, result === 'met' ? areaThird : areaHalf), changeWords('duration rise', pair.durationRise, riseLarge)])
  if (result !== 'not-assessable') return { result, numbers }
  return notAssessable(joined([pair.areaFall.because, pair.durationRise.because]), numbers)
}

const atWrist = ['wrist', 'forearm']
const atElbow = ['elbow', 'below-elbow', 'above-elbow']
/** Wrist to elbow, or elbow to axilla. */
const isLongSegment = ({ from, to }: SitePair) => (atWrist.includes(from.id) && atElbow.includes(to.id)) || (atElbow.includes(from.id) && to.id === 'axilla')

/** Dispersion: the negative peak gets longer by more than 30 %. */
export function dispersionIn(pair: SitePair): Finding {
  const result = truthOf(pair.durationRise, riseLarge)
  const numbers = changeWords('duration rise', pair.durationRise, riseLarge)
  return result === 'not-assessable' ? notAssessable(pair.durationRise.because) : { result, numbers }
}

/** Proximal to distal amplitude under 0.5, or under 0.36 where the distal amplitude is not above 1 mV. */
export function ratioIn(pair: SitePair): Finding {
  if (pair.amplitudeFall.state === 'missing') return notAssessable(pair.amplitudeFall.because)
  if (pair.distalAmplitude.state !== 'number') return notAssessable(`distal amplitude ${pair.distalAmplitude.because}`)
  const isLarge = passes(pair.distalAmplitude.value, { op: 'above', value: 1 })
  const bar: Bar = { op: 'below', value: isLarge ? 0.5 : 0.36 }
  const ratio = 1 - pair.amplitudeFall.percent / 100
  return { result: passes(ratio, bar) ? 'met' : 'not-met', numbers: `ratio ${printBeside(ratio, 2, bar)}, limit ${bar.value} at ${printBeside(pair.distalAmplitude.value, 1, { op: 'above', value: 1 })} mV` }
}

function changeWords(what: string, change: Change, bar: Bar): string {
  return change.state === 'number' ? `${what} ${printBeside(change.percent, 0, bar)} %` : ''
}

/** Asks each pair; the first that is met stands for the nerve, else all that are open, else the pair with the greatest fall. */
export function overPairs(pairs: readonly SitePair[], rule: (pair: SitePair) => Finding): Finding {
  const asked = pairs.map(pair => ({ pair, finding: rule(pair) }))
  const found = asked.filter(({ finding }) => finding.result === 'met')
  const result = anyOf(asked.map(({ finding }) => finding.result))
  if (result === 'not-assessable') return notAssessable(joined(asked.map(({ finding }) => finding.because)), '')
  const [greatest] = [...asked].sort((a, b) => sizeOf(b.pair) - sizeOf(a.pair))
  const shown = found.length > 0 ? found : greatest ? [greatest] : []
  return { result, numbers: joined(shown.map(({ pair, finding }) => `${pair.label}: ${finding.numbers.replaceAll('; ', ', ')}`)) }
}

const sizeOf = ({ areaFall, amplitudeFall }: SitePair) => areaFall.state === 'number' ? areaFall.percent : amplitudeFall.state === 'number' ? amplitudeFall.percent : Number.NEGATIVE_INFINITY
