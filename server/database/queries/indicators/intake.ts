import { sql } from 'kysely'
import type { IndicatorCase } from '#shared/indicators'
import type { Database } from '../../connection'
import { caseOf, hoursBetween, ids, rowsOf, type CaseRow, type Span } from './cases'

/** Last received complete before the first booking, to the start of the first appointment. */
export async function waitCases(db: Database, { siteIds, from, until }: Span): Promise<IndicatorCase[]> {
  const rows = await rowsOf(db, sql<CaseRow & { urgency: string }>`
    with first as (select referral_id, created_at, starts_at, row_number() over (partition by referral_id order by created_at, id) as n from booking)
    select r.site_id, first.created_at as at, r.id as subject_id, r.number, r.urgency,
      ${hoursBetween(sql`coalesce((select max(s.at) from state_change s where s.subject = 'referral' and s.subject_id = r.id and s.to_state = 'received' and s.at <= first.created_at), r.received_at)`, sql`first.starts_at`)} as hours
    from first join referral r on r.id = first.referral_id
    where first.n = 1 and r.site_id in (${ids(siteIds)}) and first.created_at >= ${from} and first.created_at < ${until} and r.received_at is not null and r.state <> 'entered-in-error'`)
  return rows.map(row => caseOf(row, 'referral', { urgency: row.urgency }))
}

/** Received referrals, and whether one was ever returned for information. */
export async function returnedCases(db: Database, { siteIds, from, until }: Span): Promise<IndicatorCase[]> {
  const rows = await rowsOf(db, sql<CaseRow & { practice: string | null, reason: string | null }>`
    select r.site_id, r.received_at as at, r.id as subject_id, r.number, practice.name as practice,
      exists (select 1 from state_change s where s.subject = 'referral' and s.subject_id = r.id and s.to_state = 'returned') as counts,
      (select s.reason from state_change s where s.subject = 'referral' and s.subject_id = r.id and s.to_state = 'returned' order by s.id limit 1) as reason
    from referral r left join physician on physician.id = r.physician_id left join practice on practice.id = physician.practice_id
    where r.site_id in (${ids(siteIds)}) and r.received_at >= ${from} and r.received_at < ${until} and r.state <> 'entered-in-error'`)
  return rows.map(row => caseOf(row, 'referral', { practice: row.practice ?? 'no practice', ...(row.counts ? { reason: row.reason || 'no reason given' } : {}) }))
}

const leads: [number, string][] = [[7, 'up to 1 week'], [14, 'up to 2 weeks'], [28, 'up to 4 weeks'], [56, 'up to 8 weeks'], [Infinity, 'over 8 weeks']]

/** @example leadBand(10) // => 'up to 2 weeks' */
export const leadBand = (days: number): string => leads.find(([most]) => days <= most)?.[1] ?? ''

/** Bookings that were kept or missed. */
export async function noShowCases(db: Database, { siteIds, from, until }: Span): Promise<IndicatorCase[]> {
  const rows = await rowsOf(db, sql<CaseRow & { days: number }>`
    select b.site_id, b.starts_at as at, r.id as subject_id, r.number, b.state = 'did-not-attend' as counts, julianday(b.starts_at) - julianday(b.created_at) as days
    from booking b join referral r on r.id = b.referral_id
    where b.site_id in (${ids(siteIds)}) and b.starts_at >= ${from} and b.starts_at < ${until} and b.state in ('arrived', 'attended', 'did-not-attend')`)
  return rows.map(row => caseOf(row, 'referral', { lead: leadBand(row.days) }))
}
