import type { Trx } from '#server/database/connection'
import { isToIdentify } from '#server/database/queries/desk-referrals'
import { copiesOf, referralInputOf } from '#server/database/queries/referrals'
import type { Referral } from '#server/database/tables/referral'
import { DomainError } from '#shared/errors'
import { missingForBooking, urgencyLabels, type Urgency } from '#shared/schemas/referral'
import type { ReturnInput } from '#shared/schemas/letter'
import { askedBy } from '#shared/return-reasons'
import type { ReferralState } from '#shared/states'
import { now, type ServiceContext } from './context'
import { closeRequests, remindReferrer, writeLetter } from './letters'
import { moveState } from './move-state'
import { protocolAt } from './protocols'
import { recordAuditEvent } from './record-audit-event'
import { tellPatient } from './tell-patient'

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
    await closeRequests(context, trx, id, 'received')
    await recordAuditEvent(context, trx, { name: 'referral.received', ...about(referral), data: {} })
  })
}

/**
 * Accepts with a protocol, and perhaps another urgency than was asked, with the reason.
 * @throws DomainError 'not-valid' with what is missing for booking, field by field
 */
export async function acceptReferral(context: ServiceContext, { id, protocol, urgency, urgencyReason }: { id: string, protocol: string, urgency?: Urgency, urgencyReason?: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const referral = await referralIn(trx, id)
    if (!await protocolAt(context, trx, { siteId: referral.siteId, id: protocol })) throw new DomainError('not-valid', { fields: [{ path: 'protocol', message: 'Choose a protocol from the list.' }] })
    const before = referralInputOf(referral, await copiesOf(trx, id))
    const changed = urgency !== undefined && urgency !== before.urgency
    if (changed && (urgencyReason ?? '').length < 3) throw new DomainError('not-valid', { fields: [{ path: 'urgencyReason', message: 'Say why the urgency changes.' }] })
    const missing = missingForBooking({ ...before, ...(changed ? { urgency, urgencyReason } : {}) })
    if (referral.state === 'received' && await isToIdentify(trx, id)) throw new DomainError('not-valid', { fields: [{ path: 'patientId', message: 'Say first who the patient is: a new one, or one of the register.' }] })
    if (referral.state === 'received' && missing.length) throw new DomainError('not-valid', { fields: missing })
    await moveState(context, trx, { subject: 'referral', id, from: 'received', to: 'accepted' })
    await trx.updateTable('referral').set({ protocol, revision: referral.revision + 1 }).where('id', '=', id).execute()
    if (changed) await writeUrgency(context, trx, referral, urgency, urgencyReason ?? '')
    await recordAuditEvent(context, trx, { name: 'referral.accepted', ...about(referral), data: { protocol } })
  })
}

async function writeUrgency(context: ServiceContext, trx: Trx, referral: Referral, urgency: Urgency, reason: string): Promise<void> {
  await trx.updateTable('referral').set({ urgency, urgencyReason: reason }).where('id', '=', referral.id).execute()
  await recordAuditEvent(context, trx, { name: 'referral.urgency-changed', ...about(referral), data: { before: urgencyLabels[referral.urgency], after: urgencyLabels[urgency] } })
  if (reason !== referral.urgencyReason) await recordAuditEvent(context, trx, { name: 'referral.changed', ...about(referral), data: { changes: [{ field: 'urgencyReason', before: referral.urgencyReason }] } })
}

/**
 * Triage finds it more or less urgent than was asked.
 * @throws DomainError 'wrong-state' once the patient is there
 */
export async function changeUrgency(context: ServiceContext, { id, urgency, reason }: { id: string, urgency: Urgency, reason: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const referral = await referralIn(trx, id)
    if (!['received', 'returned', 'accepted', 'booked', 'did-not-attend'].includes(referral.state)) throw new DomainError('wrong-state', { details: { state: referral.state } })
    if (urgency === referral.urgency) throw new DomainError('not-valid', { fields: [{ path: 'urgency', message: 'Choose another urgency.' }] })
    await trx.updateTable('referral').set({ revision: referral.revision + 1 }).where('id', '=', id).execute()
    await writeUrgency(context, trx, referral, urgency, reason)
  })
}

interface WithReason { id: string, reason: string }
interface Closing { name: 'referral.declined' | 'referral.cancelled', from: readonly ReferralState[], to: ReferralState }

async function closeWithReason(context: ServiceContext, { id, reason }: WithReason, { name, from, to }: Closing, also?: (trx: Trx, referral: Referral) => Promise<void>): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const referral = await referralIn(trx, id)
    await moveState(context, trx, { subject: 'referral', id, from, to, reason })
    await trx.updateTable('booking').set({ state: 'cancelled', reason }).where('referralId', '=', id).where('state', 'in', ['booked', 'arrived']).execute()
    await closeRequests(context, trx, id, 'withdrawn')
    await tellPatient(context, trx, { referralId: id })
    await recordAuditEvent(context, trx, { name, ...about(referral), data: {} })
    await also?.(trx, referral)
  })
}

/**
 * Asks the referring physician for what is missing: a mail brings a link, and the referral comes back by itself when it
 * is completed there. The question in own words stands behind the link, not in the mail.
 */
export async function returnReferral(context: ServiceContext, { id, reasons, note }: ReturnInput & { id: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const referral = await referralIn(trx, id)
    const reason = [...askedBy(reasons.filter(one => one !== 'other')).labels, ...(note ? [note] : [])].join('; ')
    await moveState(context, trx, { subject: 'referral', id, from: 'received', to: 'returned', reason })
    await recordAuditEvent(context, trx, { name: 'referral.returned', ...about(referral), data: {} })
    await writeLetter(context, trx, referral, { kind: 'information', reasons, note })
  })
}

/**
 * Reminds whoever is waited for: the referring physician of what is missing.
 * @returns false when the physician cannot be mailed: then there is a task
 * @throws DomainError 'wrong-state' when nothing is asked
 */
export async function remind(context: ServiceContext, { id }: { id: string }): Promise<boolean> {
  return await context.db.transaction().execute(async (trx) => {
    const referral = await referralIn(trx, id)
    if (referral.state !== 'returned') throw new DomainError('wrong-state', { details: { state: referral.state } })
    return await remindReferrer(context, trx, referral)
  })
}

/**
 * The clinic will not do it. Frees the room and the technologist. The reason is the advice: the referring physician reads
 * it at the desk, and through a mailed link where `tell` says so; the mail itself holds none of it.
 */
export function declineReferral(context: ServiceContext, { tell = true, ...input }: WithReason & { tell?: boolean }): Promise<void> {
  return closeWithReason(context, input, { name: 'referral.declined', from: ['draft', 'received', 'returned', 'accepted', 'booked'], to: 'declined' },
    async (trx, referral) => tell && referral.state !== 'draft' ? await writeLetter(context, trx, referral, { kind: 'advice', note: input.reason }) : undefined)
}

/** It is no longer wanted. Frees the room and the technologist. */
export function cancelReferral(context: ServiceContext, input: WithReason): Promise<void> {
  return closeWithReason(context, input, { name: 'referral.cancelled', from: ['draft', 'received', 'returned', 'accepted', 'booked', 'did-not-attend'], to: 'cancelled' })
}
