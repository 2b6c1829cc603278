import { sql, type RawBuilder } from 'kysely'
import type { IndicatorCase } from '#shared/indicators'
import type { Database } from '../../connection'

/** Which sites, and from which moment until before which. */
export interface Span { siteIds: readonly string[], from: string, until: string }

/** A row as every query here gives it; `groups` come as columns of their own. */
export interface CaseRow { siteId: string, at: string, subjectId: string, number: string, counts?: number | null, hours?: number | null, personId?: string | null }

/** Hours between two moments as the database keeps them. */
export const hoursBetween = (from: RawBuilder<unknown>, until: RawBuilder<unknown>) => sql<number>`(julianday(${until}) - julianday(${from})) * 24`

export const ids = (values: readonly string[]) => sql.join(values.length ? values : [''])

export async function rowsOf<R extends CaseRow>(db: Database, query: RawBuilder<R>): Promise<R[]> {
  return (await query.execute(db)).rows
}

export function caseOf(row: CaseRow, subject: IndicatorCase['subject'], groups: Record<string, string> = {}): IndicatorCase {
  const { siteId, at, subjectId, number } = row
  return {
    siteId, at, subject, subjectId, number, groups,
    ...(row.counts === undefined || row.counts === null ? {} : { counts: row.counts === 1 }),
    ...(row.hours === undefined || row.hours === null ? {} : { hours: row.hours }),
    ...(row.personId ? { personId: row.personId } : {}),
  }
}
