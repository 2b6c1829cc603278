import { sql } from 'kysely'
import type { IndicatorCase } from '#shared/indicators'
import type { Database } from '../../connection'
import { caseOf, hoursBetween, ids, rowsOf, type CaseRow, type Span } from './cases'

const tables = sql`from delivery d join report_version v on v.id = d.report_version_id join report on report.id = v.report_id join practice on practice.id = d.practice_id`

export async function deliverCases(db: Database, { siteIds, from, until }: Span): Promise<IndicatorCase[]> {
  const rows = await rowsOf(db, sql<CaseRow & { method: string }>`
    select d.site_id, v.signed_at as at, report.id as subject_id, report.number, d.method, ${hoursBetween(sql`v.signed_at`, sql`d.sent_at`)} as hours
    ${tables} where d.site_id in (${ids(siteIds)}) and v.signed_at >= ${from} and v.signed_at < ${until} and d.sent_at is not null`)
  return rows.map(row => caseOf(row, 'report', { method: row.method }))
}

export async function acknowledgeCases(db: Database, { siteIds, from, until }: Span): Promise<IndicatorCase[]> {
  const rows = await rowsOf(db, sql<CaseRow & { method: string }>`
    select d.site_id, d.sent_at as at, report.id as subject_id, report.number, d.method, ${hoursBetween(sql`d.sent_at`, sql`d.acknowledged_at`)} as hours
    ${tables} where d.site_id in (${ids(siteIds)}) and d.sent_at >= ${from} and d.sent_at < ${until} and d.acknowledged_at is not null`)
  return rows.map(row => caseOf(row, 'report', { method: row.method }))
}

/** Sent at least 7 days before `now`, not withdrawn. */
export async function notAcknowledgedCases(db: Database, { siteIds, from, until }: Span, now: string): Promise<IndicatorCase[]> {
  const rows = await rowsOf(db, sql<CaseRow & { practice: string }>`
    select d.site_id, d.sent_at as at, report.id as subject_id, report.number, practice.name as practice,
      d.acknowledged_at is null or julianday(d.acknowledged_at) - julianday(d.sent_at) > 7 as counts
    ${tables} where d.site_id in (${ids(siteIds)}) and d.sent_at >= ${from} and d.sent_at < ${until} and julianday(${now}) - julianday(d.sent_at) >= 7 and d.state <> 'withdrawn'`)
  return rows.map(row => caseOf(row, 'report', { practice: row.practice }))
}

export async function withdrawnCases(db: Database, { siteIds, from, until }: Span): Promise<IndicatorCase[]> {
  const rows = await rowsOf(db, sql<CaseRow & { opened: number }>`
    select d.site_id, d.state_since as at, report.id as subject_id, report.number, d.acknowledged_at is not null as opened
    ${tables} where d.site_id in (${ids(siteIds)}) and d.state = 'withdrawn' and d.sent_at is not null and d.state_since >= ${from} and d.state_since < ${until}`)
  return rows.map(row => caseOf(row, 'report', { acknowledged: row.opened ? 'acknowledged' : 'not acknowledged' }))
}
