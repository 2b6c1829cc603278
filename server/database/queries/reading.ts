import { sql, type ExpressionBuilder } from 'kysely'
import { unsignedAges, type ReadingPage } from '#shared/schemas/reading'
import type { PageQuery } from '#shared/schemas/common'
import type { Urgency } from '#shared/schemas/referral'
import type { StudyState } from '#shared/states'
import type { Database } from '../connection'
import type { Tables } from '../tables/index'
import { newestFirst } from './newest-first'
import { searchPatients } from './patients'

export interface ReadingQueue {
  siteIds: string[]
  states: StudyState[]
  /** Read by one of these; null: nobody has taken it. */
  readerIds?: string[] | null
  urgency?: Urgency
  /** Waiting in its state since before this moment. */
  since?: string
  /** Of these people only. */
  patientIds?: string[]
}

/** The people that the words mean, or the study's own number. */
async function narrowed(db: Database, wanted: ReadingQueue, search: string): Promise<ReadingQueue & { number?: string }> {
  const words = search.trim()
  if (words === '') return wanted
  if (/^(REF|NCS)-/i.test(words)) return { ...wanted, number: words.toUpperCase() }
  return { ...wanted, patientIds: (await searchPatients(db, { search: words, page: 1, pageSize: 200 })).rows.map(patient => patient.id) }
}

type Narrowed = Awaited<ReturnType<typeof narrowed>>
const byReader = (readerIds: string[] | null | undefined) => (eb: ExpressionBuilder<Tables, 'study'>) => readerIds ? eb('study.readerId', 'in', readerIds) : eb('study.readerId', 'is', null)

const queue = (db: Database, { siteIds, states, readerIds, urgency, since, patientIds, number }: Narrowed) => db.selectFrom('study')
  .where('study.siteId', 'in', siteIds).where('study.state', 'in', states)
  .$if(readerIds !== undefined, query => query.where(byReader(readerIds)))
  .$if(urgency !== undefined, query => query.where(eb => eb.exists(eb.selectFrom('referral').select('id').whereRef('referral.id', '=', 'study.referralId').where('urgency', '=', urgency!))))
  .$if(since !== undefined, query => query.where('study.stateSince', '<', since!))
  .$if(patientIds !== undefined, query => query.where('study.patientId', 'in', patientIds!))
  .$if(number !== undefined, query => query.where(eb => eb.or([eb('study.number', '=', number!), eb.exists(eb.selectFrom('referral').select('id').whereRef('referral.id', '=', 'study.referralId').where('number', '=', number!))])))

/** What was read stays for ever: its page is found by an index before anything is joined to it. */
function readPage(db: Database, { siteIds, states, readerIds }: ReadingQueue, page: Pick<PageQuery, 'page' | 'pageSize'>): Promise<string[]> {
  const also = readerIds === undefined ? undefined : readerIds === null ? sql`reader_id IS NULL` : sql`reader_id IN (${sql.join(readerIds)})`
  return newestFirst(db, { table: 'study', siteIds, states, ...(also && { also }) }, page)
}

/** Same week (an acute palsy, a suspected acute neuropathy) before urgent before routine, then those that have waited longest. */
const urgencyRank = sql<number>`case referral.urgency when 'same-week' then 0 when 'urgent' then 1 else 2 end`

/** What waits to be read, or was read, at these sites. */
export async function readingPage(db: Database, asked: ReadingQueue, { page, pageSize, search = '' }: Pick<PageQuery, 'page' | 'pageSize'> & { search?: string }): Promise<Omit<ReadingPage, 'waiting' | 'signWithinHours'>> {
  const wanted = await narrowed(db, asked, search)
  const { total } = await queue(db, wanted).select(eb => eb.fn.countAll<number>().as('total')).executeTakeFirstOrThrow()
  const simple = wanted.urgency === undefined && wanted.since === undefined && wanted.patientIds === undefined && wanted.number === undefined
  const done = wanted.states.every(state => state === 'read')
  const ids = done && simple ? await readPage(db, wanted, { page, pageSize }) : undefined
  const rows = await queue(db, wanted)
    .innerJoin('referral', 'referral.id', 'study.referralId').innerJoin('patient', 'patient.id', 'study.patientId').innerJoin('site', 'site.id', 'study.siteId')
    .leftJoin('user as reader', 'reader.id', 'study.readerId').leftJoin('report', 'report.studyId', 'study.id')
    .select(['study.id as studyId', 'study.number', 'familyName', 'givenName', 'birthDate', 'recordNumber', 'clinicalQuestion as question', 'urgency', 'study.state', 'handedOverAt', 'study.stateSince', 'study.siteId', 'site.name as siteName', 'readerId', 'reader.name as readerName', 'summaryJson', 'report.id as reportId', 'report.readyFingerprint'])
    .$if(!done, query => query.orderBy(urgencyRank).orderBy('study.stateSince'))
    .$if(done, query => query.orderBy('study.stateSince', 'desc'))
    .$if(ids !== undefined, query => query.where('study.id', 'in', ids!))
    .orderBy('study.id').limit(pageSize).offset(ids ? 0 : (page - 1) * pageSize).execute()
  return { total, page, pageSize, rows: rows.map(({ familyName, givenName, summaryJson, reportId, readyFingerprint, ...row }) => ({ ...row, patientName: `${familyName}, ${givenName}`, flagged: flaggedIn(summaryJson), hasDraft: reportId !== null, ready: readyFingerprint !== null, away: null })) }
}

/** How many studies of these sites wait unsigned, and how many of them too long. */
export async function waitingCounts(db: Database, siteIds: string[], now: Date): Promise<ReadingPage['waiting']> {
  const moments = unsignedAges.map(hours => ({ hours, before: new Date(now.getTime() - hours * 3_600_000).toISOString() }))
  const rows = await db.selectFrom('study').where('siteId', 'in', siteIds).where('state', '=', 'handed-over').select('stateSince').execute()
  return { all: rows.length, older: moments.map(({ hours, before }) => ({ hours, count: rows.filter(row => row.stateSince < before).length })) }
}

/** The count that was kept at hand-over, so that the list assesses nothing. */
function flaggedIn(summaryJson: string | null): number {
  if (!summaryJson) return 0
  const summary = JSON.parse(summaryJson) as { flagged?: number }
  return summary.flagged ?? 0
}
