import type { QuantityId } from '../../catalogue/quantities'
import type { StimulationSite, Technique } from '../../catalogue/types'
import type { Entry, Run, RunRow } from '../../schemas/study'
import { absentBecause, notComputable, valueOf } from '../computed-value'
import { makeResult, type ResultInput } from '../make-result'
import { quantityInfo } from '../quantity-info'
import type { KnownRun, StudyContext } from '../study-context'
import type { ComputedValue, Result } from '../types'

/** One row of a run with its place in the catalogue. */
export interface PlacedRow { row: RunRow, site: StimulationSite | undefined, /** Index in the technique's sites; after all of them when unknown. */ place: number, label: string }

/** Collects the results of one run. */
export interface RunMaker {
  context: StudyContext
  known: KnownRun
  run: Run
  technique: Technique
  rows: readonly PlacedRow[]
  results: Result[]
}

export function runMaker(context: StudyContext, known: KnownRun, technique: Technique): RunMaker {
  return { context, known, run: known.run, technique, rows: placedRows(known.run, technique), results: [] }
}

/** Distal to proximal as in the catalogue, whatever the order they were added in. */
export function placedRows(run: Run, technique: Technique): PlacedRow[] {
  const placed = run.rows.map((row) => {
    const index = technique.sites.findIndex(site => site.id === row.site)
    const site = index < 0 ? undefined : technique.sites[index]
    return { row, site, place: index < 0 ? technique.sites.length : index, label: site?.label ?? row.site }
  })
  return placed.sort((a, b) => a.place - b.place)
}

/**
 * A typed cell as a computed value; a blank one says what is missing. Uncertainty (expanded, k = 2) goes with latencies.
 *
 * @example
 * cellOf({ values: { latencyMs: 'no-response' } }, 'latencyMs') // => { kind: 'absent', absence: 'no-response' }
 */
export function cellOf(row: Pick<RunRow, 'values'>, quantity: QuantityId, uncertainty?: number): ComputedValue {
  return entryValue(row.values[quantity], `${quantityInfo(quantity).label} missing`, uncertainty)
}

export function entryValue(entry: Entry | undefined, missing: string, uncertainty?: number): ComputedValue {
  if (entry === undefined) return notComputable(missing)
  return typeof entry === 'number' ? valueOf(entry, uncertainty) : absentBecause(entry)
}

export const isLatency = (quantity: string) => quantity.endsWith('LatencyMs') || quantity === 'latencyMs' || quantity.startsWith('r1') || quantity.startsWith('r2')

/** Adds a result of this run. */
export function add(maker: RunMaker, input: Omit<ResultInput, 'key' | 'runId' | 'side' | 'cold' | 'supersededBy'> & { rowId: string, keyEnd?: string }): Result {
  const { known, run } = maker
  const result = makeResult(maker.context, {
    ...input,
    key: `${run.id}/${input.rowId}/${input.keyEnd ?? input.quantity}`,
    runId: run.id,
    side: run.side,
    cold: known.bearing,
    supersededBy: known.supersededBy,
  })
  maker.results.push(result)
  return result
}

/** What every question to the sets about this run says. */
export function questionFor(maker: RunMaker, at: string | null, distanceMm: number | null): NonNullable<ResultInput['query']> {
  const { run, technique } = maker
  return {
    technique: technique.id,
    at,
    direction: run.direction ?? technique.direction ?? null,
    amplitudeDefinition: run.amplitudeDefinition ?? technique.amplitudeDefinition ?? null,
    distanceMm,
  }
}

/** Distances, stimuli and counts are never judged. */
const notJudged = new Set(['distanceMm', 'stimulusMa', 'stimulusCount', 'responseCount', 'limbLengthMm', 'legLengthMm', 'rateHz', 'secondsAfterExercise', 'mLatencyMs', 'mAmplitudeMv', 'hAmplitudeMv'])
export const isJudged = (quantity: string) => !notJudged.has(quantity)

/** Every typed cell of a row, in the order of the technique's columns. */
export function addTyped(maker: RunMaker, placed: PlacedRow, options: { label: (quantity: QuantityId) => string, at: string | null, distanceMm: number | null, supporting: (quantity: QuantityId) => boolean }): void {
  const { row } = placed
  for (const quantity of maker.technique.quantities) {
    const entry = row.values[quantity]
    if (entry === undefined) continue
    add(maker, {
      rowId: row.id, quantity, at: row.site, label: options.label(quantity), typed: true,
      value: entryValue(entry, '', isLatency(quantity) ? maker.context.expanded.latencyMs : undefined),
      ...(isJudged(quantity) && { query: questionFor(maker, options.at, options.distanceMm) }),
      supporting: options.supporting(quantity),
    })
  }
}
