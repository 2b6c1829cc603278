import type { Side } from '../../schemas/common'
import { sideWords } from '../words'
import { beyondLimit } from './criteria'
import { readingOf, readingOfResult, type Facts, type RunFacts } from './facts'
import { atLeast, joined, notAssessable, passes, plainNumber, printBeside, type Bar, type Finding, type Truth } from './finding'

/** Rules on one segment of a nerve, shared by the elbow and the fibular head. */
export interface SegmentQuestion { facts: Facts, run: RunFacts | undefined, segment: string }

/** Velocity of the segment below the limit of the sets in use. */
export function slowSegment({ facts, run, segment }: SegmentQuestion): Finding {
  return beyondLimit(facts, readingOf(facts, run, 'velocityMps', segment), 'lower')
}

/** Velocity of the segment against a fixed bar, m/s. */
export function segmentBelow({ facts, run, segment }: SegmentQuestion, bar: Bar): Finding {
  return fixed(readingOf(facts, run, 'velocityMps', segment), bar, 'm/s')
}

/**
 * How much slower the segment is than the one before it: against the limit of the sets in use where they have one, else
 * against the published bar.
 */
export function velocityDropIn({ facts, run, segment }: SegmentQuestion, published: Bar): Finding {
  const reading = readingOf(facts, run, 'velocityDropMps', segment)
  const own = beyondLimit(facts, reading, 'upper')
  return own.result === 'not-assessable' ? fixed(reading, published, 'm/s') : own
}

/** The same against a fixed bar only. */
export function dropAbove({ facts, run, segment }: SegmentQuestion, bar: Bar): Finding {
  return fixed(readingOf(facts, run, 'velocityDropMps', segment), bar, 'm/s')
}

/** Fall of the amplitude over the segment in per cent; a response lost over it is a fall of 100 %. */
export function amplitudeFallIn({ facts, run, segment }: SegmentQuestion, bar: Bar): Finding {
  const reading = readingOf(facts, run, 'amplitudeFallPercent', segment)
  if (reading.state === 'no-response') return { result: 'met', numbers: 'no response above, 100 %' }
  return fixed(reading, bar, '%')
}

/** The same against the limit of the sets in use where they have one. */
export function amplitudeFallOwn(question: SegmentQuestion, published: Bar): Finding {
  const reading = readingOf(question.facts, question.run, 'amplitudeFallPercent', question.segment)
  const own = beyondLimit(question.facts, reading, 'upper')
  return own.result === 'not-assessable' ? amplitudeFallIn(question, published) : own
}

function fixed(reading: ReturnType<typeof readingOf>, bar: Bar, unit: string): Finding {
  if (reading.state !== 'number') return notAssessable(reading.because)
  return { result: passes(reading.value, bar) ? 'met' : 'not-met', numbers: `${printBeside(reading.value, 1, bar)} ${unit}, limit ${plainNumber(bar.value)} ${unit}` }
}

/**
 * Two concordant findings: an isolated one is not enough, since with many limits one is outside by chance.
 */
export function concordant(findings: readonly Finding[], needed: number): { met: Truth, count: number } {
  return { met: atLeast(needed, findings.map(({ result }) => result)), count: findings.filter(({ result }) => result === 'met').length }
}

/** Is anything of other nerves outside its limit? Then a lesion of this nerve would not be an isolated one. */
export function otherNervesNormal(facts: Facts, side: Side, ownNerves: readonly string[]): Finding {
  const results = facts.input.runs.map(({ technique, side: runSide }) => facts.run(technique, runSide))
    .filter((run, place, all) => run && all.indexOf(run) === place && !run.cold && !(ownNerves.includes(run.technique.nerve) && run.assessment.side === side))
    .map(run => run as RunFacts)
  const judged = results.filter(run => run.assessment.results.some(result => 'limits' in result.verdict && readingOfResult(result).state !== 'missing'))
  if (judged.length === 0) return notAssessable('no other nerve judged by a limit')
  const flagged = judged.filter(run => run.assessment.results.some(result => result.flagged))
  const names = joined(flagged.map(run => `${sideWords[run.assessment.side]} ${run.technique.label}`))
  return flagged.length === 0 ? { result: 'met', numbers: `runs within their limits: ${judged.length}` } : { result: 'not-met', numbers: `outside: ${names}` }
}
