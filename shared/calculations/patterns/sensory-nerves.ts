import { nerveLabels } from '../../catalogue/nerves'
import { sides, type Side } from '../../schemas/common'
import { sideWords } from '../words'
import { beyondLimit } from './criteria'
import { noted, readingOf, recall, usualSite, type Facts, type Reading, type RunFacts } from './facts'
import { anyOf, joined, met, notAssessable, type Finding } from './finding'

/** A sensory nerve of one side at its usual site. */
export interface SensoryNerve {
  name: string
  nerve: string
  side: Side
  run: RunFacts
  amplitude: Reading
  velocity: Reading
  onset: Reading
  peak: Reading
}

/** Techniques that stand for each sensory nerve, the first that was recorded; the thumb and ring finger are for comparisons. */
const recordings: readonly { nerve: string, techniques: readonly string[] }[] = [
  { nerve: 'median', techniques: ['median-sensory-d2', 'median-sensory-d3'] },
  { nerve: 'ulnar', techniques: ['ulnar-sensory-d5', 'ulnar-sensory-d4'] },
  { nerve: 'superficial-radial', techniques: ['radial-sensory-snuffbox'] },
  { nerve: 'sural', techniques: ['sural'] },
  { nerve: 'superficial-fibular', techniques: ['superficial-fibular'] },
]

/** Every sensory nerve of arms and legs that was studied, right before left. */
export function sensoryNervesOf(facts: Facts): readonly SensoryNerve[] {
  return facts.sensoryNerves ??= sides.flatMap(side => recordings.map(({ nerve, techniques }) => {
    const run = techniques.map(technique => facts.run(technique, side)).find(one => one !== undefined)
    return run && sensoryNerve(facts, run, nerve, side)
  }).filter(nerve => nerve !== undefined))
}

/** A sensory run as the rules look at it. */
export function sensoryNerve(facts: Facts, run: RunFacts, nerve: string, side: Side): SensoryNerve {
  const at = usualSite(run.technique)
  return {
    name: `${sideWords[side]} ${nerveLabels[nerve] ?? nerve}`, nerve, side, run,
    amplitude: readingOf(facts, run, 'amplitudeUv', at),
    velocity: readingOf(facts, run, 'velocityMps', at),
    onset: readingOf(facts, run, 'onsetLatencyMs', at),
    peak: readingOf(facts, run, 'peakLatencyMs', at),
  }
}

/** Was a response looked for and not found? */
export const isSilent = ({ amplitude, onset, peak }: SensoryNerve): boolean => [amplitude, onset, peak].some(reading => reading.state === 'no-response')
/** Is there a response with a number? */
export const isAnswered = ({ amplitude, onset, peak }: SensoryNerve): boolean => [amplitude, onset, peak].some(reading => reading.state === 'number')

/**
 * Is the nerve slow? Its velocity against the limit; where no set has one, the peak latency stands for it (this project's
 * rule).
 */
export function isSlow(facts: Facts, nerve: SensoryNerve): Finding {
  if (isSilent(nerve)) return notAssessable('no response')
  const velocity = beyondLimit(facts, nerve.velocity, 'lower')
  if (velocity.result !== 'not-assessable') return velocity
  const peak = beyondLimit(facts, nerve.peak, 'upper')
  return peak.result === 'not-assessable' ? velocity : { ...peak, numbers: `peak latency ${peak.numbers}` }
}

/** Is the amplitude low or the response absent? */
export function isLow(facts: Facts, nerve: SensoryNerve): Finding {
  return isSilent(nerve) ? met('no response') : beyondLimit(facts, nerve.amplitude, 'lower')
}

/**
 * Is anything of the nerve outside its limit, or the response absent?
 *
 * @example
 * isAbnormal(facts, sural) // => { result: 'met', numbers: 'amplitude 2.1 µV, limit 4 µV' }
 */
export function isAbnormal(facts: Facts, nerve: SensoryNerve): Finding {
  return recall(facts, nerve.run.isAbnormal ??= noted(facts, () => lookForAbnormal(facts, nerve)))
}

function lookForAbnormal(facts: Facts, nerve: SensoryNerve): Finding {
  if (isSilent(nerve)) return met('no response')
  const parts = [
    { what: 'amplitude', finding: beyondLimit(facts, nerve.amplitude, 'lower') },
    { what: 'velocity', finding: beyondLimit(facts, nerve.velocity, 'lower') },
    { what: 'peak latency', finding: beyondLimit(facts, nerve.peak, 'upper') },
  ]
  const judged = parts.filter(({ finding }) => finding.result !== 'not-assessable')
  const outside = judged.filter(({ finding }) => finding.result === 'met')
  const said = (outside.length > 0 ? outside : judged).map(({ what, finding }) => `${what} ${finding.numbers}`)
  if (judged.length === 0) return notAssessable(joined(parts.map(({ finding }) => finding.because)))
  return { result: anyOf(judged.map(({ finding }) => finding.result)), numbers: said.join(', ') }
}
