import type { LedgerCheck } from '#shared/schemas/user'
import { now, type ServiceContext } from './context'
import { longRead } from './long-read'
import { recordAuditEvent } from './record-audit-event'
import { flushViews } from './record-view'

/**
 * Checks both chains, every signed version and every stored PDF, in a thread that can only read, and keeps in the trail
 * that it was done and what came of it.
 */
export async function verifyAudit(context: ServiceContext): Promise<LedgerCheck> {
  await flushViews(context)
  const { acts, views, head, reports } = await longRead(context, 'ledgerCheck', { chainKeys: context.keys.chainKeys })
  const intact = acts.intact && views.intact && reports.altered.length === 0
  await context.db.transaction().execute(trx => recordAuditEvent(context, trx, { name: 'audit.verified', subject: 'audit', subjectId: 'both', data: { events: acts.links, views: views.links, versions: reports.versions, intact } }))
  return { at: now(context), acts, views, head, reports }
}
