import type { ServiceContext } from './context'
import { recordAuditEvent } from './record-audit-event'

/** Writes a refused access to the audit trail. The route holds ids only: no patient data is ever part of an address. */
export async function recordRefusal(context: ServiceContext, refusal: { action: string, siteId: string | null, route: string, because: string }): Promise<void> {
  await context.db.transaction().execute(trx => recordAuditEvent(context, trx, {
    name: 'access.refused', subject: 'route', subjectId: refusal.route.slice(0, 200), siteId: refusal.siteId,
    data: { action: refusal.action, because: refusal.because },
  }))
}
