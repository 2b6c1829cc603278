import type * as z from 'zod'
import type { Database } from '#server/database/connection'
import { auditSentence } from '#shared/audit-events'
import type { Page } from '#shared/schemas/common'
import type { LedgerRow, ledgerQuerySchema } from '#shared/schemas/user'

type LedgerQuery = z.output<typeof ledgerQuerySchema>

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
}

async function listViews(db: Database, sites: readonly string[], query: LedgerQuery): Promise<Page<LedgerRow>> {
  const { total } = await views(db, sites, query).select(eb => eb.fn.countAll<number>().as('total')).executeTakeFirstOrThrow()
  const rows = await views(db, sites, query).leftJoin('user', 'user.id', 'viewEvent.actorId')
    .select(['seq', 'at', 'user.name as actor', 'because', 'subject', 'subjectId', 'site.name as siteName'])
    .orderBy('seq', query.sort === 'seq' ? query.direction : 'desc').limit(query.pageSize).offset((query.page - 1) * query.pageSize).execute()
  return { rows: rows.map(({ because, actor, ...row }) => ({ ...row, actor: actor ?? 'unknown', name: 'view', sentence: `looked at this ${row.subject}${because ? `: ${because}` : ''}` })), total, page: query.page, pageSize: query.pageSize }
}
