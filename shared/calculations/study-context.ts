import { techniqueOf } from '../catalogue/nerves'
import type { Technique } from '../catalogue/types'
import type { ReferenceTable } from '../schemas/reference-table'
import type { Side } from '../schemas/common'
import type { Run, Study } from '../schemas/study'
import { ageInYears } from './age-on-date'
import { bodyMassIndex } from './bmi'
import type { FoundLimits } from './find-limit'
import { notCold, type ColdBearing } from './judge'
import { askerFor, type AskerFor } from './limit-asker'
import { ageNumber } from './limit-words'
import { placedRows, usualIndex, type PlacedRow } from './placed-rows'
import { rowFinder } from './row-finder'
import { roundForPrint } from './round-for-print'
import { coldOfRun, countsAsCold, temperatureContext, type Cold } from './temperature'
import type { AppliedLimit, Assessment, Policy, Result, RunAssessment } from './types'

/** A run with all that is known before its numbers are judged. */
export interface KnownRun {
  run: Run
  technique: Technique | undefined
  cold: Cold
  /** How cold bears on its numbers. */
  bearing: ColdBearing
  supersededBy?: string
  measured: boolean
  /** Its rows along the nerve, distal to proximal. */
  rows: readonly PlacedRow[]
  /** Rows beside the nerve's line: another nerve stimulated, the same muscle recorded. */
  asides: readonly PlacedRow[]
  /** The row of the usual distal site: what comparisons and side differences use. */
  usual: PlacedRow | undefined
}

export type BySide = Partial<Record<Side, KnownRun>>

/** Everything that does not change while one study is assessed; built once, so that every look-up is by key. */
export interface StudyContext {
  study: Study
  policy: Policy
  tables: readonly ReferenceTable[]
  person: Assessment['person']
  runs: readonly KnownRun[]
  known: ReadonlyMap<string, KnownRun>
  /** By technique: the run that stands for each side. */
  standing: ReadonlyMap<string, BySide>
  expanded: { distanceMm: number, latencyMs: number }
  askerFor: AskerFor
  /** Every limit that was applied, for the list of sets used. */
  applied: Set<AppliedLimit>
  /** The row of a set that a limit came from. */
  rowOf: (limit: AppliedLimit) => ReferenceTable['rows'][number] | undefined
  /** Limits that there are and that the verdict does not carry: superseded, not recordable, judged by another number. */
  limitsUnsaid: Map<Result, FoundLimits>
  assessed: Map<string, RunAssessment>
}

export function studyContext(study: Study, tables: readonly ReferenceTable[], policy: Policy): StudyContext {
  const person = personOf(study)
  const runs = knownRuns(study, tables, policy)
  const known = new Map(runs.map(one => [one.run.id, one]))
  markSuperseded(runs, known)
  return {
    study, policy, tables, person, runs, known,
    standing: standingRuns(runs),
    expanded: { distanceMm: policy.distanceUncertaintyMm, latencyMs: policy.latencyUncertaintyMs },
    askerFor: askerFor(tables, policy, { ageYears: person.ageYears, sexForLimits: person.sexForLimits, heightCm: person.heightCm, bmi: person.bmi }),
    applied: new Set(), rowOf: rowFinder(tables), limitsUnsaid: new Map(), assessed: new Map(),
  }
}

function personOf(study: Study): Assessment['person'] {
  const { heightCm, weightKg } = study
  const ageYears = ageInYears(study.patient.birthDate, study.studyDate)
  const sexForLimits = study.patient.sexForLimits
  const bmi = bodyMassIndex({ heightCm, weightKg })
  const words = [
    `${sexWord(sexForLimits, ageYears)}${ageYears === null ? ' of unknown age' : ` of ${ageNumber(ageYears)}`}`,
    heightCm === null ? 'height missing' : `${roundForPrint(heightCm, heightCm % 1 ? 1 : 0)} cm`,
    bmi === null ? 'BMI missing' : `BMI ${roundForPrint(bmi, 1)}`,
  ].join(', ')
  return { ageYears, sexForLimits, heightCm, weightKg, bmi, words }
}

function sexWord(sex: Assessment['person']['sexForLimits'], ageYears: number | null): string {
  if (sex === null) return 'person (sex missing)'
  const child = ageYears !== null && ageYears < 18
  if (sex === 'female') return child ? 'girl' : 'woman'
  return child ? 'boy' : 'man'
}

function knownRuns(study: Study, tables: readonly ReferenceTable[], policy: Policy): KnownRun[] {
  const temperatures = temperatureContext(study, tables, policy)
  return study.runs.map((run): KnownRun => {
    const { technique, measured, rows, asides } = recordedRun(run)
    const cold = coldOfRun(temperatures, run, technique)
    const bearing: ColdBearing = countsAsCold(cold, run) ? { state: 'all', words: cold.because } : notCold
    return { run, technique, measured, rows, asides, cold, bearing, usual: technique && rows[usualIndex(rows, technique)] }
  })
}

/** A run with its technique and its rows in the order of the catalogue; stimulation beside the nerve's line apart. */
export function recordedRun(run: Run): Pick<KnownRun, 'run' | 'technique' | 'measured' | 'rows' | 'asides'> {
  const technique = techniqueOf(run.technique)
  const placed = technique ? placedRows(run, technique) : []
  const asides = placed.filter(one => one.site?.aside)
  return { run, technique, measured: isMeasured(run), rows: asides.length > 0 ? placed.filter(one => !one.site?.aside) : placed, asides }
}

/** Was anything recorded, an absent response included? A run marked as not done was not. */
export function isMeasured(run: Run): boolean {
  if (run.notDoneBecause?.trim()) return false
  return run.rows.some((row) => {
    for (const quantity in row.values) if (quantity !== 'distanceMm') return true
    return (row.series?.length ?? 0) > 0 || Object.keys(row.ordinals ?? {}).length > 0
  })
}

/** A warm repeat of a cold run stands in its place. */
function markSuperseded(runs: readonly KnownRun[], known: ReadonlyMap<string, KnownRun>): void {
  for (const repeat of runs) {
    const { repeats, technique, side, id } = repeat.run
    const before = repeats === undefined ? undefined : known.get(repeats)
    if (!before || before === repeat || !repeat.measured || repeat.cold.state !== 'warm') continue
    const same = before.run.technique === technique && before.run.side === side
    const isCold = before.cold.state === 'cold' || before.cold.state === 'unknown'
    if (same && isCold && (before.supersededBy === undefined || id > before.supersededBy)) before.supersededBy = id
  }
}

function standingRuns(runs: readonly KnownRun[]): Map<string, BySide> {
  const standing = new Map<string, BySide>()
  for (const one of runs) {
    if (!one.measured || one.supersededBy !== undefined || !one.technique) continue
    let bySide = standing.get(one.run.technique)
    if (!bySide) standing.set(one.run.technique, bySide = {})
    const other = bySide[one.run.side]
    if (!other || standsBefore(one, other)) bySide[one.run.side] = one
  }
  return standing
}

/** Of two runs of the same nerve and side: warm before cold, then the later, then by id, so that order does not matter. */
function standsBefore(one: KnownRun, other: KnownRun): boolean {
  const coldness = (known: KnownRun) => known.bearing.state === 'none' ? 0 : 1
  if (coldness(one) !== coldness(other)) return coldness(one) < coldness(other)
  const times = [one, other].map(known => known.run.recordedAt === undefined ? 0 : Date.parse(known.run.recordedAt))
  if (times[0] !== times[1]) return (times[0] as number) > (times[1] as number)
  return one.run.id > other.run.id
}

export function standingRun(context: StudyContext, technique: string, side: Side): KnownRun | undefined {
  return context.standing.get(technique)?.[side]
}
