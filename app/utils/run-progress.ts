import type { QuantityId } from '#shared/catalogue/quantities'
import type { RunKind, Technique } from '#shared/catalogue/types'
import { siteOf } from '#shared/catalogue/nerves'
import type { Run, RunRow } from '#shared/schemas/study'

export type RunProgress = 'left' | 'begun' | 'done' | 'not-done'

/** What a row of each kind cannot do without; duration, area and stimulus may stay blank. */
const needed: Partial<Record<RunKind, QuantityId[]>> = {
  'motor': ['latencyMs', 'amplitudeMv', 'distanceMm'],
  'sensory': ['onsetLatencyMs', 'peakLatencyMs', 'amplitudeUv', 'distanceMm'],
  'mixed': ['onsetLatencyMs', 'peakLatencyMs', 'amplitudeUv', 'distanceMm'],
  'f-wave': ['minimumLatencyMs'],
  'h-reflex': ['hLatencyMs'],
  'blink': ['r1Ms', 'r2IpsilateralMs', 'r2ContralateralMs'],
}

const isAbsence = (value: unknown) => typeof value === 'string'
/** Was anything typed into this row? */
export const hasEntries = (row: RunRow) => Object.keys(row.values).length > 0 || (row.series?.length ?? 0) > 0 || Object.keys(row.ordinals ?? {}).length > 0

/** An absence in one cell (no response) answers for the whole row; so does a series. */
function rowIsDone(row: RunRow, { id, kind }: Technique): boolean {
  // Beside the nerve's line the size alone is asked for.
  const ids = siteOf(id, row.site)?.aside ? (['amplitudeMv'] as const) : needed[kind]
  if (!ids || (row.series?.length ?? 0) > 0) return hasEntries(row)
  return ids.every(id => row.values[id] !== undefined) || Object.values(row.values).some(isAbsence)
}

/**
 * How far a run is: nothing typed, begun, every row has what it needs, or left out with a reason.
 *
 * @example runProgress(technique, run) // => 'done'
 */
export function runProgress(technique: Technique, run: Run): RunProgress {
  if (run.notDoneBecause) return 'not-done'
  if (!run.rows.some(hasEntries)) return 'left'
  return run.rows.every(row => rowIsDone(row, technique)) ? 'done' : 'begun'
}

export const progressWords: Record<RunProgress, string> = { 'left': 'left to do', 'begun': 'begun', 'done': 'done', 'not-done': 'not done, with a reason' }
