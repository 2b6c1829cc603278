import { sql } from 'kysely'
import type { Policy } from '#shared/calculations/types'
import { STUDY_FORMAT, type KeptCheck, type Run, type RunRow, type Study } from '#shared/schemas/study'
import type { Database } from '../connection'
import type { StudyCell } from '../tables/study-cell'
import type { Study as StudyRecord } from '../tables/study'
import type { StudyRow } from '../tables/study-row'
import type { StudyRun } from '../tables/study-run'
import { policyOf } from './policy'

/** A study as it stands in the database: the typed values, what it is judged by, and the revisions that saving compares. */
export interface StoredStudy {
  record: StudyRecord
  study: Study
  policy: Policy
  /** Key `${rowId}/${field}`. A cell that was emptied keeps its revision. */
  cellRevisions: Record<string, number>
  runRevisions: Record<string, number>
  plannedRunIds: string[]
}

export async function studyRecord(db: Database, studyId: string): Promise<StudyRecord | undefined> {
  return db.selectFrom('study').selectAll().where('id', '=', studyId).executeTakeFirst()
}

export async function siteOfStudy(db: Database, studyId: string): Promise<string | null> {
  const row = await db.selectFrom('study').select('siteId').where('id', '=', studyId).executeTakeFirst()
  return row?.siteId ?? null
}

/** Everything `assessStudy` needs but the reference tables, which are no part of the database. */
export async function loadStudy(db: Database, studyId: string): Promise<StoredStudy | undefined> {
  const record = await studyRecord(db, studyId)
  if (!record) return undefined
  const [person, runs, rows, cells, temperatures, keptChecks, visits, policy] = await Promise.all([
    db.selectFrom('referral').innerJoin('patient', 'patient.id', 'referral.patientId').select(['referral.side', 'patient.birthDate', 'patient.sexForLimits']).where('referral.id', '=', record.referralId).executeTakeFirstOrThrow(),
    db.selectFrom('studyRun').selectAll().where('studyId', '=', studyId).where('removedAt', 'is', null).orderBy('position').orderBy('id').execute(),
    db.selectFrom('studyRow').innerJoin('studyRun', 'studyRun.id', 'studyRow.runId').selectAll('studyRow').where('studyRun.studyId', '=', studyId).where('studyRow.removedAt', 'is', null).orderBy('studyRow.position').orderBy('studyRow.id').execute(),
    db.selectFrom('studyCell').selectAll().where('studyId', '=', studyId).execute(),
    db.selectFrom('studyTemperature').selectAll().where('studyId', '=', studyId).where('removedAt', 'is', null).orderBy('at').orderBy(sql`rowid`).execute(),
    db.selectFrom('studyKeptCheck').select(['key', 'reason', 'sentence', 'cellsJson']).where('studyId', '=', studyId).orderBy('key').execute(),
    db.selectFrom('studyVisit').select('startedAt').where('studyId', '=', studyId).orderBy('startedAt').execute(),
    policyOf(db, record),
  ])
  const study: Study = {
    format: STUDY_FORMAT, id: studyId, studyDate: record.studyDate,
    patient: { birthDate: person.birthDate, sexForLimits: person.sexForLimits },
    heightCm: record.heightCm, weightKg: record.weightKg, referralSide: person.side,
    temperatures: temperatures.map(({ id, segment, side, celsius, at, method, warmed }) => ({ id, segment, side, celsius, at, method, warmed: warmed === 1 })),
    runs: runsOf(runs, rows, cells),
    keptChecks: keptChecks.map(({ key, reason, sentence, cellsJson }) => ({ key, reason, ...(sentence === null ? {} : { sentence }), ...(cellsJson === null ? {} : { cells: JSON.parse(cellsJson) as KeptCheck['cells'] }) })),
    ...(visits.length ? { visits } : {}),
  }
  return {
    record, study, policy,
    cellRevisions: Object.fromEntries(cells.map(cell => [`${cell.rowId}/${cell.field}`, cell.revision])),
    runRevisions: Object.fromEntries(runs.map(run => [run.id, run.revision])),
    plannedRunIds: runs.filter(run => run.planned === 1).map(run => run.id),
  }
}

/** What of a run is not a cell: direction, filter, elbow angle, temperature reading, quality … */
export type RunSettings = Omit<Run, 'id' | 'technique' | 'side' | 'rows'>

function runsOf(runs: StudyRun[], rows: StudyRow[], cells: StudyCell[]): Run[] {
  const rowsByRun = groupBy(rows, row => row.runId)
  const cellsByRow = groupBy(cells, cell => cell.rowId)
  return runs.map(run => ({
    id: run.id, technique: run.technique, side: run.side,
    ...(JSON.parse(run.settingsJson) as RunSettings),
    rows: (rowsByRun.get(run.id) ?? []).map(row => rowOf(row, cellsByRow.get(row.id) ?? [])),
  }))
}

/** A cell's field is a quantity id, `series`, or `ordinal:<id>`; `null` is an emptied cell. */
function rowOf(row: StudyRow, cells: StudyCell[]): RunRow {
  const result: RunRow = { id: row.id, site: row.site, values: {} }
  for (const { field, entryJson } of cells.toSorted((a, b) => a.field < b.field ? -1 : 1)) {
    const entry = JSON.parse(entryJson)
    if (entry === null) continue
    if (field === 'series') result.series = entry
    else if (field.startsWith('ordinal:')) result.ordinals = { ...result.ordinals, [field.slice('ordinal:'.length)]: entry }
    else result.values[field as keyof RunRow['values']] = entry
  }
  return result
}

function groupBy<T>(items: readonly T[], keyOf: (item: T) => string): Map<string, T[]> {
  const groups = new Map<string, T[]>()
  for (const item of items) groupOf(groups, keyOf(item)).push(item)
  return groups
}

function groupOf<T>(groups: Map<string, T[]>, key: string): T[] {
  const group = groups.get(key) ?? []
  groups.set(key, group)
  return group
}
