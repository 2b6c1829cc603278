import { sql } from 'kysely'
import { techniqueOf } from '#shared/catalogue/nerves'
import type { IndicatorCase } from '#shared/indicators'
import type { Database } from '../../connection'
import { caseOf, ids, rowsOf, type CaseRow, type Span } from './cases'

const handedOver = ({ siteIds, from, until }: Span) => sql`s.site_id in (${ids(siteIds)}) and s.handed_over_at >= ${from} and s.handed_over_at < ${until} and s.state <> 'entered-in-error'`

/** Whether every limb segment with a recorded nerve run has a temperature. */
export async function temperatureCases(db: Database, span: Span): Promise<IndicatorCase[]> {
  const rows = await rowsOf(db, sql<CaseRow & { runs: string, readings: string }>`
    select s.site_id, s.handed_over_at as at, s.id as subject_id, s.number,
      (select json_group_array(distinct run.technique || '/' || run.side) from study_run run where run.study_id = s.id and run.removed_at is null
        and exists (select 1 from study_row line join study_cell cell on cell.row_id = line.id where line.run_id = run.id and line.removed_at is null)) as runs,
      (select json_group_array(distinct t.segment || '/' || t.side) from study_temperature t where t.study_id = s.id and t.removed_at is null) as readings
    from study s where ${handedOver(span)}`)
  return rows.map(({ runs, readings, ...row }) => {
    const known = new Set(JSON.parse(readings) as string[])
    return caseOf({ ...row, counts: segmentsOf(JSON.parse(runs) as string[]).every(segment => known.has(segment)) ? 1 : 0 }, 'study')
  })
}

/** The limb segments, with their side, that these techniques need a temperature of. */
function segmentsOf(runs: readonly string[]): string[] {
  return [...new Set(runs.flatMap((run) => {
    const [technique = '', side = ''] = run.split('/')
    const found = techniqueOf(technique)
    return found?.temperatureSegment && found.kind !== 'needle' ? [`${found.temperatureSegment}/${side}`] : []
  }))]
}

/** Whether a run of the study repeats another one. */
export async function coldRepeatCases(db: Database, span: Span): Promise<IndicatorCase[]> {
  const rows = await rowsOf(db, sql<CaseRow>`
    select s.site_id, s.handed_over_at as at, s.id as subject_id, s.number,
      exists (select 1 from study_run run where run.study_id = s.id and run.removed_at is null and json_extract(run.settings_json, '$.repeats') is not null) as counts
    from study s where ${handedOver(span)}`)
  return rows.map(row => caseOf(row, 'study'))
}

/** Studies begun within 90 days after a stopped one of the same patient. */
export async function repeatVisitCases(db: Database, { siteIds, from, until }: Span): Promise<IndicatorCase[]> {
  const rows = await rowsOf(db, sql<CaseRow>`
    select s.site_id, s.started_at as at, s.id as subject_id, s.number,
      exists (select 1 from study earlier where earlier.patient_id = s.patient_id and earlier.id <> s.id and earlier.state = 'stopped'
        and earlier.study_date <= s.study_date and julianday(s.study_date) - julianday(earlier.study_date) <= 90) as counts
    from study s where s.site_id in (${ids(siteIds)}) and s.started_at >= ${from} and s.started_at < ${until} and s.state <> 'entered-in-error'`)
  return rows.map(row => caseOf(row, 'study'))
}

/** Checks that stood at hand-over, each one a case. */
export async function keptCheckCases(db: Database, span: Span): Promise<IndicatorCase[]> {
  const rows = await rowsOf(db, sql<CaseRow & { check: string, kept: number, asked: number }>`
    select s.site_id, s.handed_over_at as at, s.id as subject_id, s.number, each.key as "check", json_extract(each.value, '$.kept') as kept, json_extract(each.value, '$.asked') as asked
    from study s, json_each(s.summary_json, '$.checks') each where ${handedOver(span)} and s.summary_json is not null`)
  return rows.flatMap(({ kept, asked, check, ...row }) => Array.from({ length: asked }, (_, index) => caseOf({ ...row, counts: index < kept ? 1 : 0 }, 'study', { check })))
}

export async function outputCases(db: Database, span: Span): Promise<IndicatorCase[]> {
  const rows = await rowsOf(db, sql<CaseRow>`select s.site_id, s.handed_over_at as at, s.id as subject_id, s.number, s.technologist_id as person_id from study s where ${handedOver(span)} and s.technologist_id is not null`)
  return rows.map(row => caseOf(row, 'study'))
}
