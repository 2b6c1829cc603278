import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import { copiesOf, referralInputOf } from '#server/database/queries/referrals'
import type { Referral } from '#server/database/tables/referral'
import { DomainError, type FieldError } from '#shared/errors'
import { missingForBooking, referralSchema, type ReferralInput } from '#shared/schemas/referral'
import type { ReferralState } from '#shared/states'
import { changedFields } from './changed-fields'
import { mayAt, now, type ServiceContext } from './context'
import { writeStateChange } from './move-state'
import { nextNumber } from './next-number'
import { recordAuditEvent } from './record-audit-event'
import { withdrawReady } from './withdraw-ready'

/** After these nothing of a referral changes: its report shows what was asked. */
const closed: readonly ReferralState[] = ['answered', 'declined', 'cancelled', 'entered-in-error']
/** From these on it must stay complete. */
const mustBeComplete: readonly ReferralState[] = ['accepted', 'booked', 'did-not-attend', 'attended']

const columnsOf = ({ copyPhysicianIds: _copies, cautions, ...columns }: ReferralInput) => ({ ...columns, cautionsJson: JSON.stringify(cautions) })

/** Every id in the form must exist: patient not merged into another, site open, physicians in the directory. */
async function checkReferences(trx: Trx, input: ReferralInput): Promise<void> {
  const fields: FieldError[] = []
  const patient = await trx.selectFrom('patient').select('mergedInto').where('id', '=', input.patientId).executeTakeFirst()
  if (!patient || patient.mergedInto) fields.push({ path: 'patientId', message: 'Choose the patient from the register.' })
  const site = await trx.selectFrom('site').select('closedAt').where('id', '=', input.siteId).executeTakeFirst()
  if (!site || site.closedAt) fields.push({ path: 'siteId', message: 'Choose an open site.' })
  const wanted = [...new Set([...(input.physicianId ? [input.physicianId] : []), ...input.copyPhysicianIds])]
  const known = new Set((await trx.selectFrom('physician').select('id').where('id', 'in', wanted).execute()).map(row => row.id))
  if (input.physicianId && !known.has(input.physicianId)) fields.push({ path: 'physicianId', message: 'Choose the referring physician from the directory.' })
  if (input.copyPhysicianIds.some(id => !known.has(id))) fields.push({ path: 'copyPhysicianIds', message: 'Choose the recipients of copies from the directory.' })
  if (fields.length) throw new DomainError('not-valid', { fields })
}

async function saveCopies(trx: Trx, referralId: string, input: ReferralInput): Promise<void> {
  await trx.deleteFrom('referralCopy').where('referralId', '=', referralId).execute()
  const copies = [...new Set(input.copyPhysicianIds)].filter(id => id !== input.physicianId)
  for (const physicianId of copies) await trx.insertInto('referralCopy').values({ referralId, physicianId }).execute()
}

/** A new referral as a draft, inside a transaction that does more with it. */
export async function insertReferral(context: ServiceContext, trx: Trx, input: ReferralInput): Promise<{ id: string, number: string }> {
  const createdBy = context.actor.userId
  if (!createdBy) throw new DomainError('not-signed-in')
  await checkReferences(trx, input)
  const [id, at] = [randomUUID(), now(context)]
  const number = await nextNumber(trx, 'referral', context.clock().getUTCFullYear())
  await trx.insertInto('referral').values({ id, number, ...columnsOf(input), state: 'draft', stateSince: at, createdAt: at, createdBy, protocol: null, receivedAt: null }).execute()
  await saveCopies(trx, id, input)
  await writeStateChange(context, trx, { subject: 'referral', id, from: null, to: 'draft' })
  await recordAuditEvent(context, trx, { name: 'referral.added', subject: 'referral', subjectId: id, siteId: input.siteId, patientId: input.patientId, data: { number } })
  return { id, number }
}

/** Saves a new referral as a draft, however incomplete. */
export async function addReferral(context: ServiceContext, input: ReferralInput): Promise<{ id: string }> {
  return context.db.transaction().execute(async (trx) => {
    const { id } = await insertReferral(context, trx, input)
    return { id }
  })
}

/** The state may forbid a change, or parts of it. */
function checkChange(context: ServiceContext, before: Referral, input: ReferralInput): void {
  if (closed.includes(before.state)) throw new DomainError('wrong-state', { details: { state: before.state } })
  const moved = input.siteId !== before.siteId
  if (moved && !mayAt(context.actor, 'referral.write', input.siteId)) throw new DomainError('not-allowed')
  const fields: FieldError[] = []
  if (moved && (before.state === 'booked' || before.state === 'attended')) fields.push({ path: 'siteId', message: 'The site of a booked referral changes by booking it at another site.' })
  if (input.patientId !== before.patientId && before.state !== 'draft') fields.push({ path: 'patientId', message: 'The patient of a received referral cannot change. Cancel it and enter a new one.' })
  if (mustBeComplete.includes(before.state)) fields.push(...missingForBooking(input))
  if (fields.length) throw new DomainError('not-valid', { fields })
}

/**
 * Changes a referral, if nobody else did since the form was filled. While it is a draft it may stay incomplete; once
 * accepted it may not become incomplete again.
 * @throws DomainError 'changed-meanwhile' with `details.theirs`, 'wrong-state', 'not-valid'
 */
export async function changeReferral(context: ServiceContext, { id, revision, input: sent }: { id: string, revision: number, input: ReferralInput }): Promise<void> {
  const input = referralSchema.parse(sent)
  await context.db.transaction().execute(async (trx) => {
    const before = await trx.selectFrom('referral').selectAll().where('id', '=', id).executeTakeFirst()
    if (!before) throw new DomainError('not-found')
    const stood = referralInputOf(before, await copiesOf(trx, id))
    if (before.revision !== revision) throw new DomainError('changed-meanwhile', { details: { theirs: { ...stood, revision: before.revision } } })
    checkChange(context, before, input)
    const changes = changedFields(stood, input)
    if (changes.length === 0) return
    await checkReferences(trx, input)
    await trx.updateTable('referral').set({ ...columnsOf(input), revision: revision + 1 }).where('id', '=', id).execute()
    await saveCopies(trx, id, input)
    await recordAuditEvent(context, trx, { name: 'referral.changed', subject: 'referral', subjectId: id, siteId: input.siteId, patientId: input.patientId, data: { changes } })
    if (input.side !== stood.side) await withdrawReady(context, trx, { referralId: id })
  })
}
