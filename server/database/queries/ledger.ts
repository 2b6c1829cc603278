import type * as z from 'zod'
import type { Database } from '#server/database/connection'
import { auditSentence } from '#shared/audit-events'
import type { Page } from '#shared/schemas/common'
import type { LedgerRow, ledgerQuerySchema } from '#shared/schemas/user'

/** `since` and `until` are the moments at which the days asked for begin and end. */
export type LedgerQuery = Omit<z.output<typeof ledgerQuerySchema>, 'from' | 'to' | 'number'> & { since?: string, until?: string, /** ids that a printed number stands for */ about?: readonly string[] }

/**
 * The ids that a printed number stands for: the patient's with everything of theirs, or one referral, study or report.
 * An unknown number stands for nothing, and then nothing is listed.
 */
export async function idsOfNumber(db: Database, number: string): Promise<string[]> {
  const wanted = number.toUpperCase()
  const patients = await db.selectFrom('patient').select('id').where('recordNumber', '=', wanted).execute()
  const merged = await db.selectFrom('patient').select('id').where('mergedInto', 'in', patients.map(patient => patient.id)).execute()
  const referrals = await db.selectFrom('referral').select('id').where('number', '=', wanted).execute()
  const studies = await db.selectFrom('study').select('id').where('number', '=', wanted).execute()
  const reports = await db.selectFrom('report').select('id').where('number', '=', wanted).execute()
  return [...patients, ...merged, ...referrals, ...studies, ...reports].map(row => row.id)
}

/** What happened at the asker's sites, and what belongs to no site (sign-ins, accounts), newest first. */
export async function listLedger(db: Database, sites: readonly string[], query: LedgerQuery): Promise<Page<LedgerRow>> {
  return query.chain === 'views' ? await listViews(db, sites, query) : await listActs(db, sites, query)
}

function acts(db: Database, sites: readonly string[], query: LedgerQuery) {
  return db.selectFrom('auditEvent').leftJoin('site', 'site.id', 'auditEvent.siteId')
    .where(eb => eb.or([eb('auditEvent.siteId', 'is', null), eb('auditEvent.siteId', 'in', sites)]))
    .$if(query.siteId !== undefined, q => q.where('auditEvent.siteId', '=', query.siteId!))
    .$if(query.actor !== undefined, q => q.where('auditEvent.actorId', '=', query.actor!))
    .$if(query.patient !== undefined, q => q.where('auditEvent.patientId', '=', query.patient!))
    .$if(query.subject !== undefined, q => q.where('auditEvent.subject', '=', query.subject!))
    .$if(query.subjectId !== undefined, q => q.where('auditEvent.subjectId', '=', query.subjectId!))
    .$if(query.about !== undefined, q => q.where(eb => eb.or([eb('auditEvent.patientId', 'in', query.about!), eb('auditEvent.subjectId', 'in', query.about!)])))
    .$if(query.since !== undefined, q => q.where('auditEvent.at', '>=', query.since!))
    .$if(query.until !== undefined, q => q.where('auditEvent.at', '<', query.until!))
    .$if(query.name !== undefined, q => q.where('auditEvent.name', '=', query.name!))
}

async function listActs(db: Database, sites: readonly string[], query: LedgerQuery): Promise<Page<LedgerRow>> {
  const { total } = await acts(db, sites, query).select(eb => eb.fn.countAll<number>().as('total')).executeTakeFirstOrThrow()
  const rows = await acts(db, sites, query)
    .select(['seq', 'at', 'actorLabel as actor', 'auditEvent.name', 'dataJson', 'subject', 'subjectId', 'site.name as siteName'])
    .orderBy('seq', query.sort === 'seq' ? query.direction : 'desc').limit(query.pageSize).offset((query.page - 1) * query.pageSize).execute()
  return { rows: rows.map(({ dataJson, ...row }) => ({ ...row, sentence: auditSentence(row.name, JSON.parse(dataJson)) })), total, page: query.page, pageSize: query.pageSize }
}

function views(db: Database, sites: readonly string[], query: LedgerQuery) {
  return db.selectFrom('viewEvent').leftJoin('site', 'site.id', 'viewEvent.siteId')
    .where(eb => eb.or([eb('viewEvent.siteId', 'is', null), eb('viewEvent.siteId', 'in', sites)]))
    .$if(query.siteId !== undefined, q => q.where('viewEvent.siteId', '=', query.siteId!))
    .$if(query.actor !== undefined, q => q.where('viewEvent.actorId', '=', query.actor!))
    .$if(query.patient !== undefined, q => q.where('viewEvent.patientId', '=', query.patient!))
    .$if(query.subject !== undefined, q => q.where('viewEvent.subject', '=', query.subject!))
    .$if(query.subjectId !== undefined, q => q.where('viewEvent.subjectId', '=', query.subjectId!))
    .$if(query.about !== undefined, q => q.where(eb => eb.or([eb('viewEvent.patientId', 'in', query.about!), eb('viewEvent.subjectId', 'in', query.about!)])))
    .$if(query.since !== undefined, q => q.where('viewEvent.at', '>=', query.since!))
    .$if(query.until !== undefined, q => q.where('viewEvent.at', '<', query.until!))
}

async function listViews(db: Database, sites: readonly string[], query: LedgerQuery): Promise<Page<LedgerRow>> {
  const { total } = await views(db, sites, query).select(eb => eb.fn.countAll<number>().as('total')).executeTakeFirstOrThrow()
  const rows = await views(db, sites, query).leftJoin('user', 'user.id', 'viewEvent.actorId')
    .select(['seq', 'at', 'user.name as actor', 'because', 'subject', 'subjectId', 'site.name as siteName'])
    .orderBy('seq', query.sort === 'seq' ? query.direction : 'desc').limit(query.pageSize).offset((query.page - 1) * query.pageSize).execute()
  return { rows: rows.map(({ because, actor, ...row }) => ({ ...row, actor: actor ?? 'unknown', name: 'view', sentence: `looked at this ${row.subject}${because ? `: ${because}` : ''}` })), total, page: query.page, pageSize: query.pageSize }
}

/** Everything that was done with and seen of these patients' records, at every site, in order. */
export async function recordHistory(db: Database, patientIds: readonly string[]): Promise<{ at: string, who: string, what: string, siteName: string | null }[]> {
  const done = await db.selectFrom('auditEvent').leftJoin('site', 'site.id', 'auditEvent.siteId').select(['at', 'actorLabel', 'auditEvent.name', 'dataJson', 'subject', 'site.name as siteName']).where('patientId', 'in', patientIds).execute()
  const seen = await db.selectFrom('viewEvent').leftJoin('site', 'site.id', 'viewEvent.siteId').leftJoin('user', 'user.id', 'viewEvent.actorId').select(['at', 'user.name as who', 'subject', 'because', 'site.name as siteName']).where('patientId', 'in', patientIds).execute()
  return [
    ...done.map(row => ({ at: row.at, who: row.actorLabel, what: `${auditSentence(row.name, JSON.parse(row.dataJson))} (${row.subject})`, siteName: row.siteName })),
    ...seen.map(row => ({ at: row.at, who: row.who ?? 'unknown', what: `looked at the ${row.subject}${row.because ? `: ${row.because}` : ''}`, siteName: row.siteName })),
  ].sort((a, b) => a.at < b.at ? -1 : a.at > b.at ? 1 : 0)
}
