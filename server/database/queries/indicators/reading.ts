import { sql } from 'kysely'
import type { IndicatorCase } from '#shared/indicators'
import type { Database } from '../../connection'
import { caseOf, hoursBetween, ids, rowsOf, type CaseRow, type Span } from './cases'

const firstSigned = ({ siteIds, from, until }: Span) => sql`
  from report_version v join report on report.id = v.report_id join study s on s.id = report.study_id join referral r on r.id = s.referral_id
  where v.version = 1 and s.site_id in (${ids(siteIds)}) and v.signed_at >= ${from} and v.signed_at < ${until}`

export async function abnormalCases(db: Database, span: Span): Promise<IndicatorCase[]> {
  const rows = await rowsOf(db, sql<CaseRow>`select s.site_id, v.signed_at as at, s.id as subject_id, s.number, coalesce(json_extract(s.summary_json, '$.flagged'), 0) > 0 as counts ${firstSigned(span)}`)
  return rows.map(row => caseOf(row, 'study'))
}

export async function signCases(db: Database, span: Span): Promise<IndicatorCase[]> {
  const rows = await rowsOf(db, sql<CaseRow & { urgency: string }>`
    select s.site_id, v.signed_at as at, s.id as subject_id, s.number, r.urgency, ${hoursBetween(sql`s.handed_over_at`, sql`v.signed_at`)} as hours ${firstSigned(span)} and s.handed_over_at is not null`)
  return rows.map(row => caseOf(row, 'study', { urgency: row.urgency }))
}

/** @example ageBand(30) // => '1 to 2 days' */
export function ageBand(hours: number): string {
  if (hours <= 24) return 'up to 24 h'
  if (hours <= 48) return '24 to 48 h'
  return hours <= 168 ? '48 h to 7 days' : 'over 7 days'
}

/** Handed over and not signed at `now`. */
export async function unsignedCases(db: Database, { siteIds, from, until }: Span, now: string): Promise<IndicatorCase[]> {
  const rows = await rowsOf(db, sql<CaseRow & { waiting: number }>`
    select s.site_id, s.handed_over_at as at, s.id as subject_id, s.number, ${hoursBetween(sql`s.handed_over_at`, sql`${now}`)} as waiting
    from study s where s.state = 'handed-over' and s.site_id in (${ids(siteIds)}) and s.handed_over_at >= ${from} and s.handed_over_at < ${until}`)
  return rows.map(row => caseOf(row, 'study', { age: ageBand(row.waiting) }))
}

export async function laterVersionCases(db: Database, span: Span): Promise<IndicatorCase[]> {
  const rows = await rowsOf(db, sql<CaseRow & { status: string | null }>`
    select s.site_id, v.signed_at as at, report.id as subject_id, report.number,
      (select later.status from report_version later where later.report_id = report.id and later.version > 1 order by later.version desc limit 1) as status ${firstSigned(span)}`)
  return rows.map(row => caseOf({ ...row, counts: row.status === null ? 0 : 1 }, 'report', row.status === null ? {} : { status: row.status }))
}

/** Everybody who had an earlier version, for each later one, and whether they got it within a day. */
export async function toldAgainCases(db: Database, { siteIds, from, until }: Span): Promise<IndicatorCase[]> {
  const rows = await rowsOf(db, sql<CaseRow>`
    with had as (select distinct later.id as version_id, d.physician_id from report_version later join report_version earlier on earlier.report_id = later.report_id and earlier.version < later.version
      join delivery d on d.report_version_id = earlier.id where d.sent_at is not null and d.sent_at <= later.signed_at and later.signed_at >= ${from} and later.signed_at < ${until})
    select s.site_id, later.signed_at as at, report.id as subject_id, report.number,
      exists (select 1 from delivery d where d.report_version_id = later.id and d.physician_id = had.physician_id and d.sent_at is not null and julianday(d.sent_at) - julianday(later.signed_at) <= 1) as counts
    from had join report_version later on later.id = had.version_id join report on report.id = later.report_id join study s on s.id = report.study_id where s.site_id in (${ids(siteIds)})`)
  return rows.map(row => caseOf(row, 'report'))
}
