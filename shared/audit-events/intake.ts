import * as z from 'zod'
import { momentWords } from '../moment-words'
import { changedFields, changes, event, nothing } from './kind'

const upload = z.object({ uploadId: z.string(), mediaType: z.string(), byteCount: z.number().int(), sha256: z.string() })

const letter = z.object({ letterId: z.string() })

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
  'referral.sent-from-desk': event(z.object({ number: z.string() }), data => `sent the referral ${data.number} from the desk`),
  'referral.patient-identified': event(z.object({ outcome: z.enum(['new', 'known']) }), data => data.outcome === 'new' ? 'said that the patient of a referral from the desk is new in the register' : 'said that the patient of a referral from the desk has a record already'),
  'referral.accepted': event(z.object({ protocol: z.string() }), data => `accepted a referral with the protocol ${data.protocol}`),
  'referral.returned': event(nothing, () => 'returned a referral for information'),
  'referral.declined': event(nothing, () => 'declined a referral'),
  'referral.cancelled': event(nothing, () => 'cancelled a referral'),
  'referral.booked': event(z.object({ bookingId: z.string(), startsAt: z.string(), timeZone: z.string().default('UTC'), outsideHours: z.boolean().default(false), instead: z.string().nullable().default(null) }), data => `booked a referral for ${momentWords(data.startsAt, data.timeZone)}${data.instead ? ', in place of an earlier booking' : ''}${data.outsideHours ? ', outside the working hours' : ''}`),
  'referral.not-attended': event(z.object({ bookingId: z.string().nullable() }), () => 'noted that the patient did not attend'),
  'referral.walked-in': event(z.object({ number: z.string() }), data => `entered the referral ${data.number} of a patient who came without a booking`),
  'referral.reopened': event(z.object({ to: z.string() }), data => `a referral is ${data.to} again: the study that was begun under it was entered in error`),
  'referral.urgency-changed': event(z.object({ before: z.string(), after: z.string() }), data => `changed the urgency of a referral from ${data.before} to ${data.after}`),
  'referral.reassigned': event(z.object({ ownerId: z.string().nullable(), before: z.string().nullable() }), data => data.ownerId ? 'gave a referral to a person to look after' : 'took a referral from the person who looked after it'),
  'letter.mailed': event(letter.extend({ kind: z.enum(['information', 'advice']), reminder: z.boolean() }), data => data.kind === 'advice' ? 'mailed the referring physician a link to the advice' : data.reminder ? 'reminded the referring physician of what is missing' : 'mailed the referring physician a link to complete the referral'),
  'letter.opened': event(letter, () => 'opened the page behind a mailed link with the date of birth'),
  'letter.refused': event(letter.extend({ because: z.string() }), data => `the page behind a mailed link was refused: ${data.because}`),
  'letter.answered': event(letter.extend({ fields: z.array(z.string()), files: z.number().int() }), data => `completed a referral: ${[...data.fields, ...(data.files ? [`${data.files} ${data.files === 1 ? 'file' : 'files'}`] : [])].join(', ') || 'in own words'}`),
  'letter.answer-seen': event(nothing, () => 'noted what came back for a referral'),
  'appointment.reminded': event(nothing, () => 'reminded a patient of an appointment'),
  'list-view.saved': event(z.object({ room: z.string() }), data => `saved a view of the list ${data.room}`),
  'list-view.removed': event(z.object({ room: z.string() }), data => `removed a saved view of the list ${data.room}`),
  'upload.added': event(upload, data => `added a file (${data.mediaType}, ${data.byteCount} bytes)`),
  'upload.removed': event(upload, data => `removed a file (${data.mediaType}, ${data.byteCount} bytes)`),
  'booking.arrival-undone': event(z.object({ bookingId: z.string() }), () => 'took back that the patient arrived'),
  'booking.arrived': event(z.object({ bookingId: z.string() }), () => 'noted that the patient arrived'),
}
