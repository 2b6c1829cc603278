import { sql, type RawBuilder } from 'kysely'
import type { PageQuery } from '#shared/schemas/common'
import type { Database } from '../connection'

export interface NewestFirst {
  table: 'study' | 'delivery'
  siteIds: readonly string[]
  states: readonly string[]
  /** A further condition on the table. */
  also?: RawBuilder<unknown>
}

/** SQLite joins 500 selections at most. */
const MOST_RANGES = 400

/**
 * The ids of one page, the latest change first. Each site and state is one range of an index, already in order; the
 * ranges are merged and only the page is read, so that ten years of work take no longer than one.
 */
export async function newestFirst(db: Database, { table, siteIds, states, also }: NewestFirst, { page, pageSize }: Pick<PageQuery, 'page' | 'pageSize'>): Promise<string[]> {
  if (siteIds.length === 0 || states.length === 0) return []
  const select = (where: RawBuilder<unknown>) => sql`SELECT id, state_since AS since FROM ${sql.table(table)} WHERE ${where}${also ? sql` AND ${also}` : sql``}`
  const ranges = siteIds.length * states.length <= MOST_RANGES
    ? siteIds.flatMap(siteId => states.map(state => select(sql`site_id = ${siteId} AND state = ${state}`)))
    : [select(sql`site_id IN (${sql.join(siteIds)}) AND state IN (${sql.join(states)})`)]
  const { rows } = await sql<{ id: string }>`${sql.join(ranges, sql` UNION ALL `)} ORDER BY since DESC, id LIMIT ${pageSize} OFFSET ${(page - 1) * pageSize}`.execute(db)
  return rows.map(row => row.id)
}
