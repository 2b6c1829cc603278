import * as z from 'zod'
import { changedFields, changes, event, nothing } from './kind'

const upload = z.object({ uploadId: z.string(), mediaType: z.string(), byteCount: z.number().int(), sha256: z.string() })

/** Patients, referrals, uploads, bookings. Reasons that people gave stand with the change of state. */
export const intakeEvents = {
  'patient.added': event(z.object({ recordNumber: z.string() }), data => `added the patient ${data.recordNumber}`),
  'patient.changed': event(changes, data => `changed a patient: ${changedFields(data)}`),
  'patient.merged': event(z.object({ keptNumber: z.string(), mergedNumber: z.string(), referrals: z.number().int(), studies: z.number().int() }), data => `put the record ${data.mergedNumber} together with ${data.keptNumber}: ${data.referrals} referrals and ${data.studies} studies moved`),
  'patient.merge-undone': event(z.object({ keptNumber: z.string(), mergedNumber: z.string() }), data => `took the records ${data.keptNumber} and ${data.mergedNumber} apart again`),
  'patient.outside-study-added': event(z.object({ performedOn: z.string(), values: z.number().int() }), data => `entered a study from elsewhere of ${data.performedOn}, with ${data.values} values`),
  'patient.outside-study-removed': event(z.object({ performedOn: z.string() }), data => `removed a study from elsewhere of ${data.performedOn}`),
  'referral.added': event(z.object({ number: z.string() }), data => `entered the referral ${data.number}`),
  'referral.changed': event(changes, data => `changed a referral: ${changedFields(data)}`),
  'referral.received': event(nothing, () => 'received a referral'),
  'referral.accepted': event(z.object({ protocol: z.string() }), data => `accepted a referral with the protocol ${data.protocol}`),
  'referral.returned': event(nothing, () => 'returned a referral for information'),
  'referral.declined': event(nothing, () => 'declined a referral'),
  'referral.cancelled': event(nothing, () => 'cancelled a referral'),
  'referral.booked': event(z.object({ bookingId: z.string(), startsAt: z.string(), instead: z.string().nullable().default(null) }), data => `booked a referral for ${data.startsAt}${data.instead ? ', in place of an earlier booking' : ''}`),
  'referral.not-attended': event(z.object({ bookingId: z.string().nullable() }), () => 'noted that the patient did not attend'),
  'referral.walked-in': event(z.object({ number: z.string() }), data => `entered the referral ${data.number} of a patient who came without a booking`),
  'referral.reopened': event(z.object({ to: z.string() }), data => `a referral is ${data.to} again: the study that was begun under it was entered in error`),
  'upload.added': event(upload, data => `added a file (${data.mediaType}, ${data.byteCount} bytes)`),
  'upload.removed': event(upload, data => `removed a file (${data.mediaType}, ${data.byteCount} bytes)`),
  'booking.arrival-undone': event(z.object({ bookingId: z.string() }), () => 'took back that the patient arrived'),
  'booking.arrived': event(z.object({ bookingId: z.string() }), () => 'noted that the patient arrived'),
}
