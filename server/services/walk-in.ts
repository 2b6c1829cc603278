import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import { DomainError, type FieldError } from '#shared/errors'
import { referralSchema } from '#shared/schemas/referral'
import type { WalkInInput } from '#shared/schemas/bench-day'
import type { ReferralState } from '#shared/states'
import { mayAt, now, type ServiceContext } from './context'
import { createTask } from './create-task'
import { moveState } from './move-state'
import { protocolAt } from './protocols'
import { recordAuditEvent } from './record-audit-event'
import { insertReferral } from './save-referral'
import { insertStudy } from './start-study'

const steps: readonly [ReferralState, ReferralState][] = [['draft', 'received'], ['received', 'accepted'], ['accepted', 'booked']]

/** In one breath what the desk does in three steps; each stands in the referral's history. */
async function moveToBooked(context: ServiceContext, trx: Trx, id: string): Promise<void> {
  for (const [from, to] of steps) await moveState(context, trx, { subject: 'referral', id, from, to, reason: 'came without a booking' })
}

/** Here and waiting. A walk-in takes no room and no time away from those who are booked. */
async function insertArrival(context: ServiceContext, trx: Trx, { referralId, siteId, createdBy }: { referralId: string, siteId: string, createdBy: string }): Promise<void> {
  const at = now(context)
  const endsAt = new Date(context.clock().getTime() + 1).toISOString()
  await trx.insertInto('booking').values({ id: randomUUID(), referralId, siteId, room: '', technologistId: null, startsAt: at, endsAt, state: 'arrived', arrivedAt: at, createdAt: at, createdBy }).execute()
}

/**
 * A patient who is here without a booking: referral, arrival and, unless `start` is false, the study, in one step. What a
 * referral needs and was not said (physician, symptoms, examination) becomes a task of the administrator: a report is not
 * sent to nobody.
 * @throws DomainError 'not-valid'
 */
export async function walkIn(context: ServiceContext, { start, protocol: protocolId, ...input }: WalkInInput): Promise<{ referralId: string, studyId: string | null }> {
  const createdBy = context.actor.userId
  if (!createdBy) throw new DomainError('not-signed-in')
  if (start && !mayAt(context.actor, 'study.record', input.siteId)) throw new DomainError('not-allowed')
  return context.db.transaction().execute(async (trx) => {
    const site = await trx.selectFrom('site').select(['id', 'timeZone']).where('id', '=', input.siteId).where('closedAt', 'is', null).executeTakeFirst()
    if (!site) throw new DomainError('not-found')
    const protocol = await protocolAt(context, trx, { siteId: site.id, id: protocolId })
    const fields: FieldError[] = protocol ? [] : [{ path: 'protocol', message: 'Choose a protocol from the list.' }]
    if (fields.length) throw new DomainError('not-valid', { fields })
    const { id, number } = await insertReferral(context, trx, referralSchema.parse(input))
    await moveToBooked(context, trx, id)
    await trx.updateTable('referral').set({ protocol: protocolId, receivedAt: now(context) }).where('id', '=', id).execute()
    await insertArrival(context, trx, { referralId: id, siteId: site.id, createdBy })
    await recordAuditEvent(context, trx, { name: 'referral.walked-in', subject: 'referral', subjectId: id, siteId: site.id, patientId: input.patientId, data: { number } })
    await createTask(context, trx, { kind: 'walk-in', subject: 'referral', subjectId: id, siteId: site.id, ownerRole: 'administrator', sentence: `${number} came without a booking. Complete the referral${input.physicianId ? '' : ' and enter its physician, or the report reaches nobody'}.` })
    if (!start) return { referralId: id, studyId: null }
    const referral = await trx.selectFrom('referral').selectAll().where('id', '=', id).executeTakeFirstOrThrow()
    const study = await insertStudy(context, trx, { ...referral, timeZone: site.timeZone })
    return { referralId: id, studyId: study.id }
  })
}
