import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import type { Referral } from '#server/database/tables/referral'
import type { Study } from '#server/database/tables/study'
import { DomainError } from '#shared/errors'
import { now, type ServiceContext } from './context'
import { aboutStudy } from './editable-study'
import { layOutRuns } from './lay-out-runs'
import { moveState, writeStateChange } from './move-state'
import { nextNumber } from './next-number'
import { keepProtocol } from './protocols'
import { recordAuditEvent } from './record-audit-event'
import { localDate } from './site-time'

/** The patient of a booked referral is here. */
export async function noteArrival(context: ServiceContext, { referralId }: { referralId: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const booking = await trx.updateTable('booking').set({ state: 'arrived', arrivedAt: now(context) }).where('referralId', '=', referralId).where('state', '=', 'booked').returningAll().executeTakeFirst()
    const referral = await trx.selectFrom('referral').select('patientId').where('id', '=', referralId).executeTakeFirst()
    if (!referral) throw new DomainError('not-found')
    if (!booking) throw new DomainError('wrong-state')
    await recordAuditEvent(context, trx, { name: 'booking.arrived', subject: 'referral', subjectId: referralId, siteId: booking.siteId, patientId: referral.patientId, data: { bookingId: booking.id } })
  })
}

/** The technologist was wrong: the patient is not here yet. */
export async function undoArrival(context: ServiceContext, { referralId }: { referralId: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const referral = await trx.selectFrom('referral').select('patientId').where('id', '=', referralId).executeTakeFirst()
    if (!referral) throw new DomainError('not-found')
    const booking = await trx.updateTable('booking').set({ state: 'booked', arrivedAt: null }).where('referralId', '=', referralId).where('state', '=', 'arrived').returningAll().executeTakeFirst()
    if (!booking) throw new DomainError('wrong-state')
    await recordAuditEvent(context, trx, { name: 'booking.arrival-undone', subject: 'referral', subjectId: referralId, siteId: booking.siteId, patientId: referral.patientId, data: { bookingId: booking.id } })
  })
}

type ToStudy = Pick<Referral, 'id' | 'patientId' | 'siteId' | 'side' | 'protocol'> & { timeZone: string }

/**
 * Makes the study of a booked referral and lays out the runs of its protocol for the side that was asked. The study is
 * dated by the calendar of its site; values that come from elsewhere bring their own day and technologist.
 */
export async function insertStudy(context: ServiceContext, trx: Trx, referral: ToStudy, origin: Partial<Pick<Study, 'studyDate' | 'startedAt' | 'technologistId'>> = {}): Promise<Study> {
  await moveState(context, trx, { subject: 'referral', id: referral.id, from: 'booked', to: 'attended' })
  const booking = await trx.updateTable('booking').set({ state: 'attended' }).where('referralId', '=', referral.id).where('state', 'in', ['booked', 'arrived']).returning('room').executeTakeFirst()
  const [id, at] = [randomUUID(), now(context)]
  const studyDate = origin.studyDate ?? localDate(context.clock(), referral.timeZone)
  const number = await nextNumber(trx, 'study', Number(studyDate.slice(0, 4)))
  const study = await trx.insertInto('study').values({
    id, number, referralId: referral.id, patientId: referral.patientId, siteId: referral.siteId, state: 'planned', stateSince: at, studyDate, startedAt: at, handedOverAt: null,
    technologistId: context.actor.userId, readerId: null, takenAt: null, protocol: referral.protocol, heightCm: null, weightKg: null, confirmationJson: null, returnRunId: null, policyJson: null, summaryJson: null, createdAt: at, ...origin,
  }).returningAll().executeTakeFirstOrThrow()
  await writeStateChange(context, trx, { subject: 'study', id, from: null, to: 'planned' })
  if (booking?.room) await trx.insertInto('studyCircumstances').values({ studyId: id, room: booking.room, supervision: null, supervisorId: null, tolerance: null }).execute()
  await keepProtocol(context, trx, study)
  await layOutRuns(context, trx, study, referral.side)
  await recordAuditEvent(context, trx, { name: 'study.started', ...aboutStudy(study), data: { number } })
  return study
}

/**
 * Starts the study of a booked referral. Nothing can be recorded before identity and side are confirmed.
 * @throws DomainError 'wrong-state' for whoever starts second
 */
export async function startStudy(context: ServiceContext, { referralId }: { referralId: string }): Promise<{ studyId: string }> {
  return context.db.transaction().execute(async (trx) => {
    const referral = await trx.selectFrom('referral').innerJoin('site', 'site.id', 'referral.siteId').selectAll('referral').select('site.timeZone').where('referral.id', '=', referralId).executeTakeFirst()
    if (!referral) throw new DomainError('not-found')
    const study = await insertStudy(context, trx, referral)
    return { studyId: study.id }
  })
}
