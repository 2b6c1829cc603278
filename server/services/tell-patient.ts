import { randomUUID } from 'node:crypto'
import type { Trx } from '#server/database/connection'
import type { Appointment } from '#server/database/tables/appointment'
import type { Booking } from '#server/database/tables/booking'
import type { MailData } from '#server/email/templates/index'
import { DomainError } from '#shared/errors'
import { now, type ServiceContext } from './context'
import { mailDomain, queueMail } from './queue-mail'
import { recordAuditEvent } from './record-audit-event'
import { instantOf, localDate } from './site-time'

/** Days before the appointment on which it is recalled, at nine in the morning there: common practice. */
export const reminderDays = 2
const reminderHour = '09:00'
/** No reminder so soon after the confirmation. */
const HALF_DAY_MS = 12 * 3_600_000

/** A mail that has not left stays here. @returns true when it did not leave */
async function holdBack(trx: Trx, mailId: string | null): Promise<boolean> {
  if (!mailId) return false
  const held = await trx.updateTable('outboxMail').set({ state: 'withdrawn', dataSealed: '' }).where('id', '=', mailId).where('state', 'in', ['queued', 'failed']).executeTakeFirst()
  return held.numUpdatedRows > 0n
}

interface Facts { referralId: string, booking: Booking | undefined, email: string | null, entry: Appointment | undefined }

async function factsOf(trx: Trx, referralId: string): Promise<Facts> {
  const patient = await trx.selectFrom('referral').innerJoin('patient', 'patient.id', 'referral.patientId').select(['email', 'mailConsent']).where('referral.id', '=', referralId).executeTakeFirstOrThrow()
  const booking = await trx.selectFrom('booking').selectAll().where('referralId', '=', referralId).where('state', 'in', ['booked', 'arrived']).executeTakeFirst()
  const entry = await trx.selectFrom('appointment').selectAll().where('referralId', '=', referralId).executeTakeFirst()
  return { referralId, booking, entry, email: patient.mailConsent === 'yes' && patient.email !== '' ? patient.email : null }
}

/**
 * Brings what the patient was told by mail in line with what stands: confirms a booking, says that it moved or is called
 * off, and queues the reminder, all in the transaction of the act. Nothing is mailed without the patient's consent, nor
 * about a time that is over. The calendar entry keeps its UID for ever and its sequence grows.
 */
export async function tellPatient(context: ServiceContext, trx: Trx, { referralId }: { referralId: string }): Promise<void> {
  const facts = await factsOf(trx, referralId)
  const ahead = facts.booking !== undefined && facts.booking.startsAt > now(context)
  if (ahead && facts.email && facts.booking) await tellBooking(context, trx, facts, facts.booking, facts.email)
  else if (facts.entry) await tellNothingStands(context, trx, facts, facts.entry)
}

async function tellBooking(context: ServiceContext, trx: Trx, { referralId, entry }: Facts, booking: Booking, email: string): Promise<void> {
  if (entry?.toldBookingId === booking.id && entry.toldAddress === email) return
  // What nobody has received yet needs no correction.
  const unheard = await holdBack(trx, entry?.toldMailId ?? null) && entry?.sequence === 0
  await holdBack(trx, entry?.reminderMailId ?? null)
  const uid = entry?.uid ?? `${randomUUID()}@${mailDomain(context.settings.mailFrom)}`
  const sequence = entry ? unheard ? 0 : entry.sequence + 1 : 0
  const known = entry?.toldBookingId != null && !unheard && entry.toldAddress === email
  const data = await mailData(context, trx, booking, { kind: known ? 'moved' : 'new', uid, sequence })
  const toldMailId = await queueMail(context, trx, { template: 'appointment', toAddress: email, data })
  const dueAt = reminderDue(context, booking, data.timeZone)
  const reminderMailId = dueAt ? await queueMail(context, trx, { template: 'appointment', toAddress: email, dueAt, data: { ...data, kind: 'reminder' } }) : null
  const values = { uid, sequence, toldBookingId: booking.id, toldAddress: email, toldMailId, reminderMailId }
  await trx.insertInto('appointment').values({ referralId, ...values }).onConflict(conflict => conflict.column('referralId').doUpdateSet(values)).execute()
}

/** Called off, not attended, or the consent was taken back: no reminder; whoever was told of a time ahead is told that it is off. */
async function tellNothingStands(context: ServiceContext, trx: Trx, { referralId, booking, email }: Facts, entry: Appointment): Promise<void> {
  await holdBack(trx, entry.reminderMailId)
  const unheard = await holdBack(trx, entry.toldMailId) && entry.sequence === 0
  const told = entry.toldBookingId ? await trx.selectFrom('booking').selectAll().where('id', '=', entry.toldBookingId).executeTakeFirst() : undefined
  const callOff = told !== undefined && booking === undefined && !unheard && told.startsAt > now(context) && email !== null && email === entry.toldAddress
  const sequence = callOff ? entry.sequence + 1 : entry.sequence
  if (callOff) await queueMail(context, trx, { template: 'appointment', toAddress: email, data: await mailData(context, trx, told, { kind: 'cancelled', uid: entry.uid, sequence }) })
  await trx.updateTable('appointment').set({ sequence, toldBookingId: null, toldMailId: null, reminderMailId: null }).where('referralId', '=', referralId).execute()
}

function reminderDue(context: ServiceContext, booking: Booking, timeZone: string): string | null {
  const day = new Date(Date.parse(`${localDate(new Date(booking.startsAt), timeZone)}T00:00:00Z`) - reminderDays * 86_400_000).toISOString().slice(0, 10)
  const due = instantOf(day, reminderHour, timeZone)
  return due.getTime() > context.clock().getTime() + HALF_DAY_MS ? due.toISOString() : null
}

async function mailData(context: ServiceContext, trx: Trx, booking: Booking, entry: { kind: 'new' | 'moved' | 'cancelled', uid: string, sequence: number }): Promise<MailData<'appointment'>> {
  const site = await trx.selectFrom('site').innerJoin('organisation', 'organisation.id', 'site.organisationId').select(['organisation.name as organisation', 'site.name as siteName', 'site.address', 'site.town', 'site.phone as sitePhone', 'site.timeZone']).where('site.id', '=', booking.siteId).executeTakeFirstOrThrow()
  const { reportLanguage } = await trx.selectFrom('referral').select('reportLanguage').where('id', '=', booking.referralId).executeTakeFirstOrThrow()
  const organizerAddress = /<([^<>]+)>/.exec(context.settings.mailFrom)?.[1] ?? context.settings.mailFrom
  return { ...site, ...entry, language: reportLanguage, startsAt: booking.startsAt, endsAt: booking.endsAt, stamp: now(context), organizerAddress }
}

/** The address or the consent of a patient changed: appointments ahead are told anew, or no longer. */
export async function tellAppointmentsAnew(context: ServiceContext, trx: Trx, patientId: string): Promise<void> {
  const booked = await trx.selectFrom('referral').select('id').where('patientId', '=', patientId).where('state', '=', 'booked').execute()
  for (const { id } of booked) await tellPatient(context, trx, { referralId: id })
}

/** Whether and about what a patient can be reminded now. */
export async function patientReminder(db: Pick<Trx, 'selectFrom'>, referralId: string, at: Date): Promise<{ email: string | null, startsAt: string, because: string }> {
  const patient = await db.selectFrom('referral').innerJoin('patient', 'patient.id', 'referral.patientId').select(['email', 'mailConsent']).where('referral.id', '=', referralId).executeTakeFirstOrThrow()
  const booking = await db.selectFrom('booking').select('startsAt').where('referralId', '=', referralId).where('state', '=', 'booked').executeTakeFirst()
  const because = patient.email === '' ? 'The patient has no e-mail address here; telephone.' : patient.mailConsent !== 'yes' ? 'The patient has not agreed to mails about appointments.' : !booking || booking.startsAt <= at.toISOString() ? 'The appointment is not ahead.' : ''
  return { email: because === '' ? patient.email : null, startsAt: booking?.startsAt ?? '', because }
}

/** Sends the reminder of an appointment now. @throws DomainError 'not-valid' when the patient cannot be mailed */
export async function remindPatient(context: ServiceContext, { referralId }: { referralId: string }): Promise<void> {
  await context.db.transaction().execute(async (trx) => {
    const { email, because } = await patientReminder(trx, referralId, context.clock())
    if (email === null) throw new DomainError('not-valid', { message: because })
    await tellPatient(context, trx, { referralId })
    const entry = await trx.selectFrom('appointment').selectAll().where('referralId', '=', referralId).executeTakeFirstOrThrow()
    const booking = await trx.selectFrom('booking').selectAll().where('referralId', '=', referralId).where('state', '=', 'booked').executeTakeFirstOrThrow()
    const data = await mailData(context, trx, booking, { kind: 'new', uid: entry.uid, sequence: entry.sequence })
    await queueMail(context, trx, { template: 'appointment', toAddress: email, data: { ...data, kind: 'reminder' } })
    const { siteId, patientId } = await trx.selectFrom('referral').select(['siteId', 'patientId']).where('id', '=', referralId).executeTakeFirstOrThrow()
    await recordAuditEvent(context, trx, { name: 'appointment.reminded', subject: 'referral', subjectId: referralId, siteId, patientId, data: {} })
  })
}
