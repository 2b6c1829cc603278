import { sql } from 'kysely'
import type { Page, PageQuery } from '#shared/schemas/common'
import type { ReadingRow } from '#shared/schemas/report'
import type { StudyState } from '#shared/states'
import type { Database } from '../connection'
import { newestFirst } from './newest-first'

export interface ReadingQueue { siteIds: string[], states: StudyState[], /** null: nobody has taken it */ readerId?: string | null }

const queue = (db: Database, { siteIds, states, readerId }: ReadingQueue) => db.selectFrom('study')
  .where('study.siteId', 'in', siteIds).where('study.state', 'in', states)
  .$if(readerId !== undefined, query => query.where('study.readerId', readerId === null ? 'is' : '=', readerId ?? null))

/** What was read stays for ever: its page is found by an index before anything is joined to it. */
function readPage(db: Database, { siteIds, states, readerId }: ReadingQueue, page: Pick<PageQuery, 'page' | 'pageSize'>): Promise<string[]> {
  return newestFirst(db, { table: 'study', siteIds, states, ...(readerId !== undefined && { also: sql`reader_id IS ${readerId}` }) }, page)
}

/** Urgent studies first, then those that have waited longest: a study must not be overtaken for ever. */
const urgencyRank = sql<number>`case referral.urgency when 'urgent' then 0 when 'same-week' then 1 else 2 end`

/** What waits to be read, or was read, at these sites. */
export async function readingPage(db: Database, wanted: ReadingQueue, { page, pageSize }: Pick<PageQuery, 'page' | 'pageSize'>): Promise<Page<ReadingRow>> {
  const { total } = await queue(db, wanted).select(eb => eb.fn.countAll<number>().as('total')).executeTakeFirstOrThrow()
  const done = wanted.states.every(state => state === 'read')
  const ids = done ? await readPage(db, wanted, { page, pageSize }) : []
  const rows = await queue(db, wanted)
    .innerJoin('referral', 'referral.id', 'study.referralId').innerJoin('patient', 'patient.id', 'study.patientId').innerJoin('site', 'site.id', 'study.siteId')
    .leftJoin('user as reader', 'reader.id', 'study.readerId').leftJoin('report', 'report.studyId', 'study.id')
    .select(['study.id as studyId', 'study.number', 'familyName', 'givenName', 'birthDate', 'recordNumber', 'clinicalQuestion as question', 'urgency', 'study.state', 'handedOverAt', 'site.name as siteName', 'readerId', 'reader.name as readerName', 'summaryJson', 'report.id as reportId'])
    .$if(!done, query => query.orderBy(urgencyRank).orderBy('study.stateSince'))
    .$if(done, query => query.where('study.id', 'in', ids).orderBy('study.stateSince', 'desc'))
    .orderBy('study.id').limit(pageSize).offset(done ? 0 : (page - 1) * pageSize).execute()
  return { total, page, pageSize, rows: rows.map(({ familyName, givenName, summaryJson, reportId, ...row }) => ({ ...row, patientName: `${familyName}, ${givenName}`, flagged: flaggedIn(summaryJson), hasDraft: reportId !== null })) }
}

/** The count that was kept at hand-over, so that the list assesses nothing. */
function flaggedIn(summaryJson: string | null): number {
  if (!summaryJson) return 0
  const summary = JSON.parse(summaryJson) as { flagged?: number }
  return summary.flagged ?? 0
}
