import type { Technique } from '../../catalogue/types'
import { nerveLabels } from '../../catalogue/nerves'
import { sides, type Side } from '../../schemas/common'
import { sideWords } from '../words'
import { missing, readingOf, usualSite, type Facts, type Reading, type RunFacts } from './facts'
import { sitePairs, type SitePair } from './site-pairs'

export type LimbNerve = 'median' | 'ulnar' | 'radial' | 'fibular' | 'tibial'

/** Segment between two neighbouring sites with its velocity. */
export interface SegmentFacts { id: string, label: string, entrapment: boolean, velocity: Reading }

/** One motor run of a nerve, as rules on demyelination look at it. */
export interface MotorRun {
  facts: RunFacts
  /** Distal latency and amplitude: at the site the distal limits are for. */
  latency: Reading
  amplitude: Reading
  /** Duration of the distal negative peak. */
  duration: Reading
  segments: readonly SegmentFacts[]
  pairs: readonly SitePair[]
}

/** One nerve of one side; both sides of a nerve count as two nerves. */
export interface MotorNerve {
  name: string
  nerve: LimbNerve
  side: Side
  runs: readonly MotorRun[]
  /** Shortest F-wave latency; undefined when no F-waves were recorded. */
  fWave: Reading | undefined
  runIds: readonly string[]
}

/**
 * Which recordings stand for which nerve. Recordings for comparison (second lumbrical, interosseous) and of muscles of
 * the leg itself are left out: common practice, the published rules name nerves with their hand and foot muscles.
 */
const recordings: readonly { nerve: LimbNerve, motor: readonly string[], fWave?: string }[] = [
  { nerve: 'median', motor: ['median-motor-apb'], fWave: 'median-f-apb' },
  { nerve: 'ulnar', motor: ['ulnar-motor-adm', 'ulnar-motor-fdi'], fWave: 'ulnar-f-adm' },
  { nerve: 'radial', motor: ['radial-motor-eip'] },
  { nerve: 'fibular', motor: ['fibular-motor-edb'], fWave: 'fibular-f-edb' },
  { nerve: 'tibial', motor: ['tibial-motor-ah'], fWave: 'tibial-f-ah' },
]

/** Every motor nerve of the limbs that was studied, right before left. */
export function motorNervesOf(facts: Facts): readonly MotorNerve[] {
  return facts.motorNerves ??= sides.flatMap(side => recordings.map(one => motorNerve(facts, one, side)).filter(nerve => nerve !== null))
}

function motorNerve(facts: Facts, { nerve, motor, fWave }: (typeof recordings)[number], side: Side): MotorNerve | null {
  const runs = motor.map(technique => facts.run(technique, side)).filter(run => run !== undefined)
  if (runs.length === 0) return null
  const late = fWave === undefined ? undefined : facts.run(fWave, side)
  return {
    name: `${sideWords[side]} ${nerveLabels[nerve] ?? nerve}`, nerve, side,
    runs: runs.map(run => motorRun(facts, run)),
    fWave: late && fReading(facts, late),
    runIds: [...runs, ...(late ? [late] : [])].map(run => run.id),
  }
}

/** Ids of every run of these nerves. */
export function runIdsOf(nerves: readonly MotorNerve[]): string[] {
  const ids: string[] = []
  for (const { runIds } of nerves) ids.push(...runIds)
  return ids
}

/** Shortest F latency; none of the stimuli answered counts as no response. */
function fReading(facts: Facts, run: RunFacts): Reading {
  const shortest = readingOf(facts, run, 'minimumLatencyMs')
  if (shortest.state !== 'missing') return shortest
  const persistence = readingOf(facts, run, 'persistencePercent')
  if (persistence.state === 'number' && persistence.value === 0) return { state: 'no-response', value: Number.NaN, because: 'no response', ...(persistence.result && { result: persistence.result }) }
  return shortest
}

/** A motor run as the rules look at it; looked at once. */
export function motorRun(facts: Facts, run: RunFacts): MotorRun {
  return run.motor ??= makeMotorRun(facts, run)
}

function makeMotorRun(facts: Facts, run: RunFacts): MotorRun {
  const usual = usualSite(run.technique)
  return {
    facts: run,
    latency: readingOf(facts, run, 'latencyMs', usual),
    amplitude: readingOf(facts, run, 'amplitudeMv', usual),
    duration: readingOf(facts, run, 'durationMs', usual),
    segments: run.cold ? [] : segmentsOf(run),
    pairs: sitePairs(facts, run),
  }
}

/** Velocities of the segments that the catalogue knows; a segment between sites that are no neighbours is not one. */
function segmentsOf({ assessment, technique }: RunFacts): SegmentFacts[] {
  const found: SegmentFacts[] = []
  for (const result of assessment.results) {
    if (result.quantity !== 'velocityMps') continue
    const segment = segmentById(technique, result.at)
    if (!segment) continue
    const velocity: Reading = result.value.kind === 'value'
      ? { state: 'number', value: result.value.value, because: '', result }
      : { ...missing(result.value.kind === 'absent' ? 'no response' : result.value.because), result }
    found.push({ id: segment.id, label: segment.label, entrapment: segment.entrapment ?? false, velocity })
  }
  return found
}

function segmentById(technique: Technique, id: string | undefined) {
  return technique.sites.find(site => site.segment?.id === id)?.segment
}
