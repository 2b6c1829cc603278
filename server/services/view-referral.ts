import { referralView } from '#server/database/queries/referrals'
import { DomainError } from '#shared/errors'
import type { ReferralView } from '#shared/schemas/referral'
import type { ServiceContext } from './context'
import { recordView } from './record-view'

/**
 * A referral with everything around it. Opening it is noted.
 * @throws DomainError 'not-found'
 */
export async function viewReferral(context: ServiceContext, id: string): Promise<ReferralView> {
  const view = await referralView(context.db, id, context.clock().toISOString().slice(0, 10))
  if (!view) throw new DomainError('not-found')
  recordView(context, { subject: 'referral', subjectId: id, siteId: view.siteId, patientId: view.patientId })
  return view
}
