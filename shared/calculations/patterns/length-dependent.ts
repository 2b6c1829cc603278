import { percentOfOwnLimit, beyondLimit } from './criteria'
import { limitOf, type Facts } from './facts'
import { allOf, anyOf, atLeast, criterion, joined, named, notAssessable, plainNumber, type CriterionText, type Finding, type Truth } from './finding'
import { segmentOutside } from './demyelination'
import { motorNervesOf, type MotorNerve } from './motor-nerves'
import { anyTruth, type NerveTruth } from './nerve-truths'
import { eachOnce, entrapmentCriterion, entrapmentText, type Assessed, type PatternSet } from './pattern-set'
import { isAbnormal, sensoryNervesOf, type SensoryNerve } from './sensory-nerves'

const texts = {
  protocol: { id: 'protocol', text: 'Simplified protocol: sural sensory and fibular motor of one leg recorded; if either is abnormal also ulnar motor, ulnar and median sensory', basis: 'read' },
  sural: { id: 'sural', text: 'Sural nerve abnormal in at least one attribute', basis: 'memory' },
  another: { id: 'another', text: 'Another nerve abnormal in at least one attribute', basis: 'memory' },
  percentile: { id: 'percentile', text: 'Beside: abnormal means at or beyond the 1st or 99th percentile; limits of the sets in use', basis: 'memory' },
  axonal: { id: 'axonal', text: 'Beside, axonal pattern: motor velocities at least 75 % of the lower limit and distal latencies at most 125 % of the upper limit (not so below 70 % or above 130 %)', basis: 'memory' },
} as const satisfies Record<string, CriterionText>

/**
 * Distal symmetric polyneuropathy by the case definition of 2005: the sural nerve and another one. The rule rests on
 * memory. The same nerve of the other side is not another nerve.
 */
export const lengthDependent: PatternSet = {
  id: 'length-dependent-2005', version: 1, title: 'Length-dependent polyneuropathy, case definition of 2005', basis: 'memory', scope: 'study',
  source: 'England JD et al., Neurology 2005;64:199-207, doi:10.1212/01.WNL.0000149522.32823.EA (abstract read, percentile rule recalled); protocol read in PMC11625971, table 3',
  criteria: [...Object.values(texts), entrapmentText],
  assess: assessLengthDependent,
}

interface Judged { nerve: string, name: string, finding: Finding, percentiles: readonly (number | null)[] }

function assessLengthDependent(facts: Facts): Assessed | null {
  const sensory = sensoryNervesOf(facts)
  const motor = motorNervesOf(facts)
  if (!sensory.some(({ nerve }) => nerve === 'sural')) return null
  const judged = [...sensory.map(nerve => judgeSensory(facts, nerve)), ...motor.map(nerve => judgeMotor(facts, nerve))]
  const surals = judged.filter(({ nerve }) => nerve === 'sural')
  const others = judged.filter(({ nerve }) => nerve !== 'sural')
  const sural = anyNerve(surals)
  const another = others.length === 0 ? notAssessable('no other nerve studied') : anyNerve(others)
  const met = allOf([sural.result, another.result])
  const criteria = [
    criterion(texts.protocol, protocolOf(judged)), criterion(texts.sural, sural), criterion(texts.another, another),
    criterion(texts.percentile, percentilesOf(judged)), criterion(texts.axonal, axonalPattern(facts, motor)),
    entrapmentCriterion(facts),
  ]
  const runIds = eachOnce([...sensory.map(({ run }) => run.id), ...motor.flatMap(({ runs }) => runs.map(run => run.facts.id))])
  return { outcome: { met, label: labelOf(met, judged) }, criteria, runIds }
}

function judgeSensory(facts: Facts, nerve: SensoryNerve): Judged {
  const isLeftOut = nerve.nerve === 'median' && facts.input.policy.leaveOutEntrapmentSites
  const finding: Finding = isLeftOut ? { result: 'not-met', numbers: 'left out at the wrist' } : isAbnormal(facts, nerve)
  return { nerve: nerve.nerve, name: `${nerve.name} sensory`, finding, percentiles: isLeftOut ? [] : [percentileOf(facts, nerve.amplitude, 'lower')] }
}

/** Distal amplitude, distal latency, and velocities; across entrapment sites only while the setting is off. */
function judgeMotor(facts: Facts, nerve: MotorNerve): Judged {
  const leaveOut = facts.input.policy.leaveOutEntrapmentSites
  const findings = nerve.runs.flatMap((run): Finding[] => {
    if (run.facts.cold) return [notAssessable(run.facts.cold)]
    const atWrist = leaveOut && nerve.nerve === 'median'
    return [
      named('amplitude', beyondLimit(facts, run.amplitude, 'lower', true)),
      ...(atWrist ? [] : [named('latency', beyondLimit(facts, run.latency, 'upper'))]),
      ...run.segments.filter(segment => !leaveOut || segmentOutside(segment)).map(segment => named('velocity', beyondLimit(facts, segment.velocity, 'lower'))),
    ]
  })
  const known = findings.filter(({ result }) => result !== 'not-assessable')
  const shown = known.filter(({ result }) => result === 'met')
  const finding: Finding = known.length === 0
    ? notAssessable(joined(findings.map(({ because }) => because)))
    : { result: anyOf(known.map(({ result }) => result)), numbers: joined((shown.length > 0 ? shown : known).map(({ numbers }) => numbers)).replaceAll('; ', ', ') }
  return { nerve: nerve.nerve, name: `${nerve.name} motor`, finding, percentiles: nerve.runs.map(run => percentileOf(facts, run.amplitude, 'lower')) }
}

function percentileOf(facts: Facts, reading: SensoryNerve['amplitude'], bound: 'lower'): number | null {
  const limit = limitOf(facts, reading, bound)
  return typeof limit === 'string' ? null : limit.percentile
}

function anyNerve(judged: readonly Judged[]): Finding {
  const result = anyOf(judged.map(({ finding }) => finding.result))
  const of = (truth: Truth) => judged.filter(({ finding }) => finding.result === truth)
  const shown = result === 'met' ? of('met') : of('not-met')
  const numbers = shown.map(({ name, finding }) => `${name} ${finding.numbers}`).join('; ')
  return result === 'not-assessable' ? notAssessable(joined(of('not-assessable').map(({ name, finding }) => `${name}: ${finding.because}`)), numbers) : { result, numbers }
}

function protocolOf(judged: readonly Judged[]): Finding {
  const has = (name: string) => judged.some(one => one.name.endsWith(name))
  const abnormal = judged.some(({ name, finding }) => (name.endsWith('sural sensory') || name.endsWith('fibular motor')) && finding.result === 'met')
  const wanted = ['sural sensory', 'fibular motor', ...(abnormal ? ['ulnar sensory', 'median sensory', 'ulnar motor'] : [])]
  const lacking = wanted.filter(name => !has(name))
  return lacking.length === 0 ? { result: 'met', numbers: wanted.join(', ') } : { result: 'not-met', numbers: `not recorded: ${lacking.join(', ')}` }
}

/** The definition asks for the 1st percentile; a set of another percentile calls more values abnormal. */
function percentilesOf(judged: readonly Judged[]): Finding {
  const known = [...new Set(judged.flatMap(({ percentiles }) => percentiles).filter(percentile => percentile !== null))]
  if (known.length === 0) return notAssessable('percentile of the limits not stated')
  const numbers = `lower limits at percentile ${known.map(plainNumber).join(', ')}`
  return { result: known.every(percentile => percentile <= 1) ? 'met' : 'not-met', numbers }
}

function axonalPattern(facts: Facts, motor: readonly MotorNerve[]): Finding {
  const truths = motor.flatMap(nerve => nerve.runs.filter(run => !run.facts.cold).map((run): NerveTruth => {
    const slow = run.segments.filter(segmentOutside).map(segment => between(facts, segment.velocity, 'lower', 75, 70))
    const late = nerve.nerve === 'median' && facts.input.policy.leaveOutEntrapmentSites ? [] : [between(facts, run.latency, 'upper', 125, 130)]
    return anyTruth([...slow, ...late].map(({ state, words }) => ({ state, words: words && `${nerve.name} ${words}` })))
  }))
  const worst = anyTruth(truths.filter(({ state }) => state !== 'left-out'))
  if (worst.state === 'left-out') return notAssessable('no motor velocity or latency with a limit')
  if (worst.state === 'met') return { result: 'not-met', numbers: worst.words }
  return worst.state === 'unknown' ? notAssessable('between the two bars', worst.words) : { result: 'met', numbers: worst.words }
}

/** Beyond the outer bar: demyelinating range. Between the bars: open. */
function between(facts: Facts, reading: SensoryNerve['amplitude'], bound: 'upper' | 'lower', inner: number, outer: number): NerveTruth {
  const op = bound === 'upper' ? 'above' : 'below'
  const [near, far] = [inner, outer].map(value => percentOfOwnLimit(facts, reading, bound, { op, value })) as [Finding, Finding]
  if (near.result === 'not-assessable') return { state: 'left-out', words: '' }
  if (far.result === 'met') return { state: 'met', words: far.numbers }
  return { state: near.result === 'met' ? 'unknown' : 'not-met', words: near.numbers }
}

function labelOf(met: Truth, judged: readonly Judged[]): string {
  const abnormal = new Set(judged.filter(({ finding }) => finding.result === 'met').map(({ nerve }) => nerve))
  const percentiles = percentilesOf(judged)
  const remark = percentiles.result === 'met' ? '' : percentiles.result === 'not-met' ? '; by limits less strict than the 1st percentile' : '; percentile of the limits not stated'
  if (met === 'met') return `sural and another nerve abnormal${remark}`
  if (met === 'not-assessable') return 'not met in what could be assessed'
  return abnormal.has('sural') ? 'sural abnormal, no other nerve' : atLeast(1, judged.map(({ finding }) => finding.result)) === 'met' ? 'sural not abnormal' : 'no nerve abnormal'
}
