import type { Technique } from '../catalogue/types'
import type { ReferenceTable } from '../schemas/reference-table'
import { sideWords } from './words'
import type { LimbTemperature, Run, Study } from '../schemas/study'
import { roundForPrint } from './round-for-print'
import { TOLERANCE } from './tolerance'
import type { Policy, RunAssessment } from './types'

/**
 * Is a run warm enough for its slowness to mean anything?
 *
 * The threshold is the stricter of the site's policy and of the sets adopted for the technique. No temperature counts as
 * cold. Defaults 32 °C hand, 30 °C foot: AANEM literature review, Denys 1991, from memory.
 */
export type Cold = RunAssessment['cold']

export interface TemperatureContext {
  readings: ReadonlyMap<string, readonly LimbTemperature[]>
  byId: ReadonlyMap<string, LimbTemperature>
  policy: Policy
  tables: readonly ReferenceTable[]
  thresholds: Map<string, number>
  /** When each further visit began, in ms, in order; empty when the study was recorded in one visit. */
  visits: readonly number[]
}

/** Sorts the readings by limb and side once per study. */
export function temperatureContext(study: Study, tables: readonly ReferenceTable[], policy: Policy): TemperatureContext {
  const readings = new Map<string, LimbTemperature[]>()
  for (const reading of study.temperatures) {
    const key = `${reading.segment}/${reading.side}`
    const list = readings.get(key)
    if (list) list.push(reading)
    else readings.set(key, [reading])
  }
  return { readings, byId: new Map(study.temperatures.map(reading => [reading.id, reading])), policy, tables, thresholds: new Map(), visits: (study.visits ?? []).map(visit => Date.parse(visit.startedAt)).sort((a, b) => a - b) }
}

/**
 * Coldest temperature at which the technique may be judged, in °C.
 *
 * @example
 * // policy 30 °C for feet, adopted set asks for 31 °C
 * thresholdFor(context, techniqueOf('sural')!) // => 31
 */
export function thresholdFor(context: TemperatureContext, technique: Technique): number {
  const known = context.thresholds.get(technique.id)
  if (known !== undefined) return known
  const segment = technique.temperatureSegment ?? 'hand'
  let threshold = segment === 'hand' ? context.policy.handMinimumC : context.policy.footMinimumC
  for (const adopted of context.policy.adopted) {
    if (adopted.techniques && !adopted.techniques.includes(technique.id)) continue
    const table = context.tables.find(candidate => candidate.id === adopted.setId && candidate.version === adopted.version)
    threshold = Math.max(threshold, table?.minimumTemperatureC[segment] ?? threshold)
  }
  context.thresholds.set(technique.id, threshold)
  return threshold
}

/**
 * State of one run: warm, cold, unknown (no reading: counts as cold) or not needed (face, trunk, needle).
 *
 * The reading is the one the run names; without one, the latest taken up to the run's own time; without such, the next
 * one after it; without times, the last in the list.
 */
export function coldOfRun(context: TemperatureContext, run: Run, technique: Technique | undefined): Cold {
  if (!technique?.temperatureSegment) return { state: 'not-needed', celsius: null, thresholdC: null, because: '' }
  const thresholdC = thresholdFor(context, technique)
  const limb = `${sideWords[run.side]} ${technique.temperatureSegment}`
  const reading = readingOfRun(context, run, technique)
  if (!reading) return { state: 'unknown', celsius: null, thresholdC, because: `no temperature of the ${limb}` }
  const warm = reading.celsius >= thresholdC - TOLERANCE
  const words = `${limb} ${roundForPrint(reading.celsius, 1)} °C`
  return { state: warm ? 'warm' : 'cold', celsius: reading.celsius, thresholdC, because: warm ? words : `${words}, below ${roundForPrint(thresholdC, thresholdC % 1 ? 1 : 0)} °C` }
}

export function readingOfRun(context: TemperatureContext, run: Run, technique: Technique): LimbTemperature | undefined {
  const visit = visitOf(context, run.recordedAt, context.visits.length)
  const sameVisit = (reading: LimbTemperature) => visitOf(context, reading.at, 0) === visit
  const named = run.temperatureId === undefined ? undefined : context.byId.get(run.temperatureId)
  if (named && named.segment === technique.temperatureSegment && named.side === run.side && sameVisit(named)) return named
  const all = context.readings.get(`${technique.temperatureSegment}/${run.side}`) ?? []
  const list = context.visits.length ? all.filter(sameVisit) : all
  if (list.length < 2) return list[0]
  return latestFor(list, run.recordedAt)
}

/** Number of the visit that a moment belongs to: 0 is the first. A limb warm last week says nothing about today. */
function visitOf({ visits }: TemperatureContext, moment: string | undefined, otherwise: number): number {
  return moment === undefined ? otherwise : visits.filter(start => start <= Date.parse(moment)).length
}

function latestFor(list: readonly LimbTemperature[], recordedAt: string | undefined): LimbTemperature | undefined {
  const runTime = recordedAt === undefined ? Number.POSITIVE_INFINITY : Date.parse(recordedAt)
  let before: LimbTemperature | undefined
  let after: LimbTemperature | undefined
  for (const reading of list) {
    const time = timeOf(reading)
    if (time <= runTime) before = before && timeOf(before) > time ? before : reading
    else if (!after || time < timeOf(after)) after = reading
  }
  return before ?? after
}

/** A reading without a time counts as the earliest: one with a time is known better. */
const timeOf = (reading: LimbTemperature) => reading.at === undefined ? Number.NEGATIVE_INFINITY : Date.parse(reading.at)

/** Does the temperature keep slowness from being judged? Not where the reader gave a reason to interpret the run cold. */
export function countsAsCold(cold: Cold, run: Pick<Run, 'interpretColdBecause'>): boolean {
  return (cold.state === 'cold' || cold.state === 'unknown') && !run.interpretColdBecause?.trim()
}
