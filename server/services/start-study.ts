import { randomUUID } from 'node:crypto'
import { DomainError } from '#shared/errors'
import { now, type ServiceContext } from './context'
import { aboutStudy } from './editable-study'
import { layOutRuns } from './lay-out-runs'
import { moveState, writeStateChange } from './move-state'
import { nextNumber } from './next-number'
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

/**
 * Makes the study of a booked referral and lays out the runs of its protocol for the side that was asked. The study is
 * dated by the calendar of its site. Nothing can be recorded before identity and side are confirmed.
 * @throws DomainError 'wrong-state' for whoever starts second
 */
export async function startStudy(context: ServiceContext, { referralId }: { referralId: string }): Promise<{ studyId: string }> {
  return context.db.transaction().execute(async (trx) => {
    const referral = await trx.selectFrom('referral').innerJoin('site', 'site.id', 'referral.siteId').selectAll('referral').select('site.timeZone').where('referral.id', '=', referralId).executeTakeFirst()
    if (!referral) throw new DomainError('not-found')
    await moveState(context, trx, { subject: 'referral', id: referralId, from: 'booked', to: 'attended' })
    await trx.updateTable('booking').set({ state: 'attended' }).where('referralId', '=', referralId).where('state', 'in', ['booked', 'arrived']).execute()
    const [id, at] = [randomUUID(), now(context)]
    const studyDate = localDate(context.clock(), referral.timeZone)
    const number = await nextNumber(trx, 'study', Number(studyDate.slice(0, 4)))
    const study = await trx.insertInto('study').values({
      id, number, referralId, patientId: referral.patientId, siteId: referral.siteId, state: 'planned', stateSince: at, studyDate, startedAt: at, handedOverAt: null,
      technologistId: context.actor.userId, readerId: null, takenAt: null, protocol: referral.protocol, heightCm: null, weightKg: null, confirmationJson: null, returnRunId: null, policyJson: null, summaryJson: null, createdAt: at,
    }).returningAll().executeTakeFirstOrThrow()
    await writeStateChange(context, trx, { subject: 'study', id, from: null, to: 'planned' })
    await layOutRuns(context, trx, study, referral.side)
    await recordAuditEvent(context, trx, { name: 'study.started', ...aboutStudy(study), data: { number } })
    return { studyId: id }
  })
}
