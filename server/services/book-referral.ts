import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import { isAway } from '#server/database/queries/absences'
import { closedDays, roomNames, siteHours } from '#server/database/queries/site-calendar'
import type { Referral } from '#server/database/tables/referral'
import type { Site } from '#server/database/tables/site'
import { DomainError, type FieldError } from '#shared/errors'
import { addDays, openDay, outsideHours } from '#shared/open-hours'
import type { BookingInput } from '#shared/schemas/referral'
import { mayAt, now, type ServiceContext } from './context'
import { moveState } from './move-state'
import { peopleWho } from './people-who'
import { recordAuditEvent } from './record-audit-event'
import { instantOf, localDate, localTime } from './site-time'
import { tellPatient } from './tell-patient'

/** Who can be booked as technologist on a day: a role at the site that records, in force on that day. */
export const recordersAt = (db: Pick<Trx, 'selectFrom'>, siteId: string, date: string) => peopleWho(db, 'study.record', siteId, date)

async function checkBooking(context: ServiceContext, trx: Trx, site: Site, booking: BookingInput, starts: Date): Promise<void> {
  const fields: FieldError[] = []
  if (!(await roomNames(trx, [site.id])).get(site.id)?.includes(booking.room)) fields.push({ path: 'room', message: 'Choose a room of this site.' })
  if (booking.technologistId && !(await recordersAt(trx, site.id, booking.date)).some(person => person.id === booking.technologistId)) fields.push({ path: 'technologistId', message: 'Choose a technologist who works at this site on that day.' })
  if (booking.date < localDate(context.clock(), site.timeZone)) fields.push({ path: 'date', message: 'The date must not lie in the past.' })
  if (localTime(starts, site.timeZone) !== booking.time) fields.push({ path: 'time', message: 'This time does not exist on that day: the clocks go forward.' })
  fields.push(...await hindrancesOf(trx, site.id, booking))
  if (fields.length) throw new DomainError('not-valid', { fields })
}

/** Working hours, closed days and absences: the first two can be overruled on purpose, since an urgent study is done on a Saturday too. */
async function hindrancesOf(trx: Trx, siteId: string, booking: BookingInput): Promise<FieldError[]> {
  const day = openDay(booking.date, await siteHours(trx, siteId), await closedDays(trx, siteId, { from: booking.date, until: addDays(booking.date, 1) }))
  const outside = booking.outsideHours ? null : outsideHours(day, booking.time, booking.minutes)
  const away = booking.technologistId !== null && await isAway(trx, booking.technologistId, { fromDay: booking.date, toDay: booking.date })
  return [
    ...(outside ? [{ path: day.spans.length ? 'time' : 'date', message: outside }] : []),
    ...(away ? [{ path: 'technologistId', message: 'This technologist is away on that day.' }] : []),
  ]
}

/** The trigger of the table refuses an overlap, whoever writes and however many at once. */
async function insertBooking(context: ServiceContext, trx: Trx, values: { id: string, referralId: string, siteId: string, room: string, technologistId: string | null, startsAt: string, endsAt: string }): Promise<void> {
  const createdBy = context.actor.userId
  if (!createdBy) throw new DomainError('not-signed-in')
  try {
    await trx.insertInto('booking').values({ ...values, state: 'booked', createdAt: now(context), createdBy }).execute()
  }
  catch (error) {
    if (error instanceof Error && error.message.includes('booking-overlap')) throw new DomainError('double-booking')
    throw error
  }
}

/** Takes back the booking that stands; a booked referral passes through "accepted", so that its history shows both. */
async function cancelBooking(context: ServiceContext, trx: Trx, referral: Referral, why: string | undefined): Promise<string | null> {
  if (referral.state !== 'booked') return null
  const reason = why ? `booked for another time: ${why}` : 'booked for another time'
  const earlier = await trx.updateTable('booking').set({ state: 'cancelled', reason }).where('referralId', '=', referral.id).where('state', 'in', ['booked', 'arrived']).returning('id').executeTakeFirst()
  await moveState(context, trx, { subject: 'referral', id: referral.id, from: 'booked', to: 'accepted', reason })
  return earlier?.id ?? null
}

/**
 * Books an accepted referral at a site's local time, or books it for another time. Booked at another site it moves there.
 * @throws DomainError 'double-booking' when the room or the technologist is taken
 */
export async function bookReferral(context: ServiceContext, { id, ...booking }: BookingInput & { id: string }): Promise<{ bookingId: string }> {
  if (!mayAt(context.actor, 'referral.book', booking.siteId)) throw new DomainError('not-allowed')
  return context.db.transaction().execute(async (trx) => {
    const referral = await trx.selectFrom('referral').selectAll().where('id', '=', id).executeTakeFirst()
    const site = await trx.selectFrom('site').selectAll().where('id', '=', booking.siteId).where('closedAt', 'is', null).executeTakeFirst()
    if (!referral || !site) throw new DomainError('not-found')
    const starts = instantOf(booking.date, booking.time, site.timeZone)
    await checkBooking(context, trx, site, booking, starts)
    const instead = await cancelBooking(context, trx, referral, booking.reason)
    await moveState(context, trx, { subject: 'referral', id, from: ['accepted', 'did-not-attend'], to: 'booked' })
    const bookingId = randomUUID()
    const [startsAt, endsAt] = [starts.toISOString(), new Date(starts.getTime() + booking.minutes * 60_000).toISOString()]
    await insertBooking(context, trx, { id: bookingId, referralId: id, siteId: site.id, room: booking.room, technologistId: booking.technologistId, startsAt, endsAt })
    if (site.id !== referral.siteId) await trx.updateTable('referral').set({ siteId: site.id, revision: referral.revision + 1 }).where('id', '=', id).execute()
    await recordAuditEvent(context, trx, { name: 'referral.booked', subject: 'referral', subjectId: id, siteId: site.id, patientId: referral.patientId, data: { bookingId, startsAt, timeZone: site.timeZone, outsideHours: booking.outsideHours ?? false, instead } })
    await tellPatient(context, trx, { referralId: id })
    return { bookingId }
  })
}

/** The patient did not come. The room is free again. */
export async function noteNotAttended(context: ServiceContext, { id, reason }: { id: string, reason: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const referral = await trx.selectFrom('referral').selectAll().where('id', '=', id).executeTakeFirst()
    if (!referral) throw new DomainError('not-found')
    await moveState(context, trx, { subject: 'referral', id, from: 'booked', to: 'did-not-attend', reason })
    const booking = await trx.updateTable('booking').set({ state: 'did-not-attend', reason }).where('referralId', '=', id).where('state', 'in', ['booked', 'arrived']).returning('id').executeTakeFirst()
    await tellPatient(context, trx, { referralId: id })
    await recordAuditEvent(context, trx, { name: 'referral.not-attended', subject: 'referral', subjectId: id, siteId: referral.siteId, patientId: referral.patientId, data: { bookingId: booking?.id ?? null } })
  })
}
