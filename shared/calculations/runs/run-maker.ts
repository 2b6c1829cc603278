import type { QuantityId } from '../../catalogue/quantities'
import type { Technique } from '../../catalogue/types'
import type { Entry, Run, RunRow } from '../../schemas/study'
import { absentBecause, notComputable, valueOf } from '../computed-value'
import type { LimitAsker } from '../limit-asker'
import { makeResult, type Owner, type ResultInput } from '../make-result'
import type { PlacedRow } from '../placed-rows'
import { quantityInfo } from '../quantity-info'
import type { KnownRun, StudyContext } from '../study-context'
import type { ComputedValue, Result } from '../types'

/** Collects the results of one run. */
export interface RunMaker {
  context: StudyContext
  known: KnownRun
  run: Run
  technique: Technique
  rows: readonly PlacedRow[]
  asides: readonly PlacedRow[]
  /** Of the row that a result was added to last. */
  owner?: Owner
  results: Result[]
}

export function runMaker(context: StudyContext, known: KnownRun, technique: Technique): RunMaker {
  const { run, rows, asides } = known
  return { context, known, run, technique, rows, asides, results: [] }
}

/**
 * A typed cell as a computed value; a blank one says what is missing. Uncertainty (expanded, k = 2) goes with latencies.
 *
 * @example
 * cellOf({ values: { latencyMs: 'no-response' } }, 'latencyMs') // => { kind: 'absent', absence: 'no-response' }
 */
export function cellOf(row: Pick<RunRow, 'values'>, quantity: QuantityId, uncertainty?: number): ComputedValue {
  const entry = row.values[quantity]
  return entry === undefined ? notComputable(`${quantityInfo(quantity).label} missing`) : entryValue(entry, uncertainty)
}

export function entryValue(entry: Entry, uncertainty?: number): ComputedValue {
  return typeof entry === 'number' ? valueOf(entry, uncertainty) : absentBecause(entry)
}

const latencies = new Set(['latencyMs', 'onsetLatencyMs', 'peakLatencyMs', 'minimumLatencyMs', 'meanLatencyMs', 'maximumLatencyMs', 'mLatencyMs', 'hLatencyMs', 'r1Ms', 'r2IpsilateralMs', 'r2ContralateralMs'])
export const isLatency = (quantity: string) => latencies.has(quantity)

/** Adds a result to a row of this run. */
export function add(maker: RunMaker, placed: PlacedRow, input: ResultInput): void {
  maker.results.push(makeResult(maker.context, ownerOf(maker, placed), input))
}

function ownerOf(maker: RunMaker, { row }: PlacedRow): Owner {
  const { known, run, owner } = maker
  if (owner?.rowId === row.id) return owner
  return maker.owner = { keyStart: `${run.id}/${row.id}/`, runId: run.id, rowId: row.id, side: run.side, cold: known.bearing, supersededBy: known.supersededBy }
}

/** Who knows the limits for a run recorded like this one, at this distance from stimulus to recording electrode. */
export function askerOf(maker: RunMaker, distanceMm: number | null): LimitAsker {
  const { run, technique } = maker
  return maker.context.askerFor({
    technique: technique.id,
    direction: run.direction ?? technique.direction ?? null,
    amplitudeDefinition: run.amplitudeDefinition ?? technique.amplitudeDefinition ?? null,
    distanceMm,
  })
}

/** Distances, stimuli, counts and direct responses beside late ones are never judged. */
const notJudged = new Set(['distanceMm', 'stimulusMa', 'stimulusCount', 'responseCount', 'limbLengthMm', 'legLengthMm', 'rateHz', 'secondsAfterExercise', 'mLatencyMs', 'mAmplitudeMv', 'hAmplitudeMv'])

export interface TypedOptions {
  /** Follows the name of the quantity: " at wrist", or nothing. */
  place: string
  /** Left out where nothing of the row is judged. */
  asker?: LimitAsker
  /** Place that limits are asked for; null for those that have none. */
  askAt: string | null
  supporting: (quantity: QuantityId) => boolean
}

/** Every typed cell of a row, in the order of the technique's columns. */
export function addTyped(maker: RunMaker, placed: PlacedRow, { place, asker, askAt, supporting }: TypedOptions): void {
  const { row } = placed
  const uncertainty = maker.context.expanded.latencyMs
  for (const quantity of maker.technique.quantities) {
    const entry = row.values[quantity]
    if (entry === undefined) continue
    add(maker, placed, {
      quantity, at: row.site, label: quantityInfo(quantity).label + place, typed: true,
      value: entryValue(entry, isLatency(quantity) ? uncertainty : undefined),
      asker: notJudged.has(quantity) ? undefined : asker, askAt, supporting: supporting(quantity),
    })
  }
}
