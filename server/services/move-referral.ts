import type { Trx } from '#server/database/connection'
import { copiesOf, referralInputOf } from '#server/database/queries/referrals'
import type { Referral } from '#server/database/tables/referral'
import { DomainError } from '#shared/errors'
import { missingForBooking, type Urgency } from '#shared/schemas/referral'
import type { ReferralState } from '#shared/states'
import { now, type ServiceContext } from './context'
import { moveState } from './move-state'
import { protocolAt } from './protocols'
import { recordAuditEvent } from './record-audit-event'

/** The steps of a referral that need no more than a word; booking has a file of its own. */

async function referralIn(trx: Trx, id: string): Promise<Referral> {
  const row = await trx.selectFrom('referral').selectAll().where('id', '=', id).executeTakeFirst()
  if (!row) throw new DomainError('not-found')
  return row
}

const about = (referral: Referral) => ({ subject: 'referral', subjectId: referral.id, siteId: referral.siteId, patientId: referral.patientId })

/** A draft is complete enough to work on, or the information asked for came back. It may still miss what booking needs. */
export async function receiveReferral(context: ServiceContext, { id }: { id: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const referral = await referralIn(trx, id)
    await moveState(context, trx, { subject: 'referral', id, from: ['draft', 'returned'], to: 'received' })
    await trx.updateTable('referral').set({ receivedAt: referral.receivedAt ?? now(context) }).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'referral.received', ...about(referral), data: {} })
  })
}

/**
 * Accepts with a protocol, and perhaps another urgency.
 * @throws DomainError 'not-valid' with what is missing for booking, field by field
 */
export async function acceptReferral(context: ServiceContext, { id, protocol, urgency }: { id: string, protocol: string, urgency?: Urgency }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const referral = await referralIn(trx, id)
    if (!await protocolAt(context, trx, { siteId: referral.siteId, id: protocol })) throw new DomainError('not-valid', { fields: [{ path: 'protocol', message: 'Choose a protocol from the list.' }] })
    const before = referralInputOf(referral, await copiesOf(trx, id))
    const missing = missingForBooking({ ...before, urgency: urgency ?? before.urgency })
    if (referral.state === 'received' && missing.length) throw new DomainError('not-valid', { fields: missing })
    await moveState(context, trx, { subject: 'referral', id, from: 'received', to: 'accepted' })
    await trx.updateTable('referral').set({ protocol, urgency: urgency ?? referral.urgency, revision: referral.revision + 1 }).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'referral.accepted', ...about(referral), data: { protocol } })
  })
}

interface WithReason { id: string, reason: string }
interface Closing { name: 'referral.returned' | 'referral.declined' | 'referral.cancelled', from: readonly ReferralState[], to: ReferralState }

async function closeWithReason(context: ServiceContext, { id, reason }: WithReason, { name, from, to }: Closing): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const referral = await referralIn(trx, id)
    await moveState(context, trx, { subject: 'referral', id, from, to, reason })
    await trx.updateTable('booking').set({ state: 'cancelled', reason }).where('referralId', '=', id).where('state', 'in', ['booked', 'arrived']).execute()
    await recordAuditEvent(context, trx, { name, ...about(referral), data: {} })
  })
}

/** Asks the referring physician for what is missing. */
export function returnReferral(context: ServiceContext, input: WithReason): Promise<void> {
  return closeWithReason(context, input, { name: 'referral.returned', from: ['received'], to: 'returned' })
}

/** The clinic will not do it. Frees the room and the technologist. */
export function declineReferral(context: ServiceContext, input: WithReason): Promise<void> {
  return closeWithReason(context, input, { name: 'referral.declined', from: ['draft', 'received', 'returned', 'accepted', 'booked'], to: 'declined' })
}

/** It is no longer wanted. Frees the room and the technologist. */
export function cancelReferral(context: ServiceContext, input: WithReason): Promise<void> {
  return closeWithReason(context, input, { name: 'referral.cancelled', from: ['draft', 'received', 'returned', 'accepted', 'booked', 'did-not-attend'], to: 'cancelled' })
}
