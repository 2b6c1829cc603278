import type { Side } from '../../schemas/common'
import { beyondLimit } from './criteria'
import { comparisonReading, noted, readingOf, recall, usualSite, type Facts, type Reading, type RunFacts } from './facts'
import { allOf, anyOf, joined, met, named, negated, notAssessable, type Finding, type Truth } from './finding'
import { isAnswered, isSilent, isSlow, sensoryNerve, type SensoryNerve } from './sensory-nerves'

/** What both grading scales of carpal tunnel syndrome look at in one hand. */
export interface HandFacts {
  latency: Reading
  amplitude: Reading
  /** No motor response of the thenar. */
  motorAbsent: Finding
  /** Distal latency above its limit; neither this nor `inTime` where there is no motor response. */
  prolonged: Finding
  inTime: Finding
  /** No sensory response from any finger that was studied. */
  sensoryAbsent: Finding
  /** Finger to wrist velocity below its limit in any finger. */
  slow: Finding
  /** Any of the most sensitive tests, which compare two nerves or look at the palm, outside its limit. */
  sensitive: Finding
  runIds: readonly string[]
}

/** Digits 2 and 3 judge the velocity; thumb and ring finger, recorded for comparison, only where neither answered. */
const mainFingers = ['d2', 'd3']
const fingers = ['median-sensory-d2', 'median-sensory-d3', 'median-sensory-d1', 'median-sensory-d4'] as const
const sensitiveTests = [
  ['median-ulnar-palm', 'peakDifferenceMs', 'palm'],
  ['median-ulnar-ring', 'peakDifferenceMs', 'ring finger'],
  ['median-radial-thumb', 'peakDifferenceMs', 'thumb'],
  ['median-ulnar-sensory', 'onsetDifferenceMs', 'digits 2 and 5, onset'],
  ['median-ulnar-sensory', 'peakDifferenceMs', 'digits 2 and 5, peak'],
  ['lumbrical-interosseous', 'motorLatencyDifferenceMs', 'lumbrical and interosseous'],
  ['combined-sensory-index', 'combinedIndexMs', 'combined index'],
] as const

/** The hand as the scales see it; null when the median nerve of this side was not studied. Looked at once for both scales. */
export function handFacts(facts: Facts, side: Side): HandFacts | null {
  return recall(facts, facts.hands[side] ??= noted(facts, () => lookAtHand(facts, side)))
}

function lookAtHand(facts: Facts, side: Side): HandFacts | null {
  const motor = facts.run('median-motor-apb', side)
  const sensory = fingers.map(id => facts.run(id, side)).filter(run => run !== undefined)
  const palm = facts.run('median-mixed-palm', side)
  if (!motor && sensory.length === 0) return null
  const wrist = motor ? usualSite(motor.technique) : ''
  const latency = readingOf(facts, motor, 'latencyMs', wrist)
  const amplitude = readingOf(facts, motor, 'amplitudeMv', wrist)
  const motorAbsent = absentMotor(latency, amplitude)
  const prolonged = named('distal latency', beyondLimit(facts, latency, 'upper'))
  const nerves = sensory.map(run => sensoryNerve(facts, run, 'median', side))
  return {
    latency, amplitude, motorAbsent,
    prolonged: motorAbsent.result === 'met' ? noMotor : prolonged,
    inTime: motorAbsent.result === 'met' ? noMotor : negated(prolonged),
    sensoryAbsent: absentIn(nerves),
    slow: slowIn(facts, nerves),
    sensitive: sensitiveIn(facts, side, palm),
    runIds: [motor, ...sensory, palm].filter(run => run !== undefined).map(run => run.id),
  }
}

const noMotor: Finding = { result: 'not-met', numbers: 'no motor response' }

function absentMotor(latency: Reading, amplitude: Reading): Finding {
  if (amplitude.state === 'no-response' || latency.state === 'no-response') return met('no motor response')
  if (amplitude.state === 'number' || latency.state === 'number') return { result: 'not-met', numbers: '' }
  return notAssessable(`motor ${amplitude.because}`)
}

/** Absent only where no finger answered; a finger that could not be read leaves it open. */
function absentIn(nerves: readonly SensoryNerve[]): Finding {
  if (nerves.length === 0) return notAssessable('no median sensory study')
  const truths = nerves.map((nerve): Truth => isAnswered(nerve) ? 'not-met' : isSilent(nerve) ? 'met' : 'not-assessable')
  const result = allOf(truths)
  const numbers = nerves.map((nerve, index) => `${nerve.run.technique.recording.label} ${truths[index] === 'met' ? 'no response' : truths[index] === 'not-met' ? 'present' : 'not known'}`).join(', ')
  return result === 'not-assessable' ? notAssessable(joined(nerves.map(({ amplitude, onset }) => amplitude.because || onset.because)), numbers) : { result, numbers }
}

/** A finger without a limit does not keep open what another one has decided. */
function slowIn(facts: Facts, nerves: readonly SensoryNerve[]): Finding {
  const answered = nerves.filter(nerve => !isSilent(nerve))
  const main = answered.filter(nerve => mainFingers.includes(nerve.run.technique.recording.id))
  const findings = (main.length > 0 ? main : answered).map(nerve => ({ what: nerve.run.technique.recording.label, finding: isSlow(facts, nerve) }))
  if (findings.length === 0) return notAssessable(nerves.length === 0 ? 'no median sensory study' : 'no response')
  const judged = findings.filter(({ finding }) => finding.result !== 'not-assessable')
  return summed(judged.length > 0 ? judged : findings)
}

/** Any of several, with the numbers of all that could be judged. */
function summed(parts: readonly { what: string, finding: Finding }[]): Finding {
  const result = anyOf(parts.map(({ finding }) => finding.result))
  const numbers = parts.filter(({ finding }) => finding.numbers).map(({ what, finding }) => `${what} ${finding.numbers}`).join('; ')
  return result === 'not-assessable' ? notAssessable(joined(parts.map(({ what, finding }) => finding.because && `${what}: ${finding.because}`)), numbers) : { result, numbers }
}

/** Only the tests that were made count; without any the finding stays open. */
function sensitiveIn(facts: Facts, side: Side, palm: RunFacts | undefined): Finding {
  const parts: { what: string, finding: Finding }[] = sensitiveTests
    .map(([id, quantity, what]) => ({ what, finding: beyondLimit(facts, comparisonReading(facts, id, side, quantity), 'upper') }))
  if (palm) parts.push({ what: 'palm to wrist', finding: isSlow(facts, sensoryNerve(facts, palm, 'median', side)) })
  const made = parts.filter(({ finding }) => finding.because !== 'not recorded')
  const judged = made.filter(({ finding }) => finding.result !== 'not-assessable')
  if (made.length === 0) return notAssessable('no comparison or palm study')
  return judged.length > 0 ? summed(judged) : summed(made)
}
