import * as z from 'zod'
import { changedFields, changes, event } from './kind'

const version = z.object({ number: z.string(), version: z.number().int(), status: z.string(), sha256: z.string() })
const delivery = z.object({ number: z.string(), version: z.number().int() })

/** Reading, signing, delivery. Recipients are named by their id; the words of a report stand in its versions only. */
export const reportEvents = {
  'study.taken': event(z.object({ from: z.string().nullable() }), data => data.from ? 'took a study over from another reader' : 'took a study to read'),
  'study.assigned': event(z.object({ from: z.string().nullable(), to: z.string() }), () => 'gave a study to a reader'),
  'study.released': event(z.object({}), () => 'gave a study back to the queue'),
  'study.returned': event(z.object({ runId: z.string().nullable() }), () => 'returned a study to the bench with a question'),
  'report.drafted': event(z.object({ number: z.string() }), data => `began the report ${data.number}`),
  'study.values-corrected': event(z.object({ changes: z.array(z.object({ runId: z.string(), rowId: z.string().optional(), field: z.string(), before: z.unknown(), after: z.unknown() })) }), data => `corrected ${data.changes.length === 1 ? 'a value' : `${data.changes.length} values`} of a read study with a new version of its report`),
  'report.ready': event(z.object({ number: z.string(), fingerprint: z.string() }), data => `marked ${data.number} ready to sign`),
  'report.signed': event(version, data => `signed ${data.number}, version ${data.version} (${data.status})`),
  'report.not-signed': event(z.object({ because: z.string() }), data => `a signature was refused: ${data.because}`),
  'report.pdf-made': event(z.object({ number: z.string(), version: z.number().int(), sha256: z.string() }), data => `made the PDF of ${data.number}, version ${data.version}`),
  'report.preliminary-printed': event(z.object({ number: z.string() }), data => `printed ${data.number} as preliminary`),
  'delivery.queued': event(delivery.extend({ physicianId: z.string(), method: z.string() }), data => `queued ${data.number}, version ${data.version}, for a recipient`),
  'delivery.sent': event(delivery.extend({ physicianId: z.string(), attempt: z.number().int() }), data => `sent ${data.number}, version ${data.version}`),
  'delivery.failed': event(delivery.extend({ attempt: z.number().int(), final: z.boolean() }), data => `${data.final ? 'gave up sending' : 'could not send'} ${data.number}, version ${data.version}`),
  'delivery.uncertain': event(delivery.extend({ messageId: z.string() }), data => `cannot tell whether ${data.number}, version ${data.version}, was sent`),
  'delivery.bounced': event(delivery.extend({ status: z.string() }), data => `learned that the mail with ${data.number}, version ${data.version}, came back`),
  'delivery.acknowledged': event(delivery, data => `the recipient acknowledged ${data.number}, version ${data.version}`),
  'delivery.page-opened': event(delivery, data => `somebody opened the page of ${data.number}, version ${data.version}, by the link of the mail`),
  'delivery.link-asked': event(delivery, data => `the recipient asked for the link of ${data.number}, version ${data.version}, to be renewed`),
  'delivery.link-renewed': event(delivery, data => `renewed the link of ${data.number}, version ${data.version}`),
  'delivery.replied': event(delivery, data => `the recipient thinks that something in ${data.number}, version ${data.version}, is wrong`),
  'delivery.reply-answered': event(delivery, data => `answered the recipient of ${data.number}, version ${data.version}`),
  'delivery.redirected': event(delivery.extend({ physicianId: z.string(), insteadOf: z.string().nullable(), reason: z.string() }), data => `sent ${data.number}, version ${data.version}, to ${data.insteadOf ? 'the right recipient instead of the wrong one' : 'another recipient'}`),
  'incident.opened': event(delivery.extend({ incidentId: z.string() }), data => `opened the incident of ${data.number}, version ${data.version}`),
  'incident.changed': event(delivery.extend({ incidentId: z.string() }).extend(changes.shape), data => `changed the incident of ${data.number}, version ${data.version}: ${changedFields(data)}`),
  'incident.closed': event(delivery.extend({ incidentId: z.string(), decision: z.string() }), data => `closed the incident of ${data.number}, version ${data.version}`),
  // Older events do not say who: it was not asked.
  'delivery.collected': event(delivery.extend({ collector: z.object({ kind: z.enum(['physician', 'delegate']), id: z.string() }).optional() }), data => `the recipient collected ${data.number}, version ${data.version}, by the link of the mail`),
  'delivery.collect-refused': event(delivery.extend({ because: z.string() }), data => `collecting ${data.number}, version ${data.version}, was refused: ${data.because}`),
  'delivery.withdrawn': event(delivery.extend({ wasSent: z.boolean() }), data => `withdrew the delivery of ${data.number}, version ${data.version}${data.wasSent ? ', after it was sent' : ''}`),
  'delivery.sent-now': event(delivery, data => `released ${data.number}, version ${data.version}, for sending`),
  'delivery.resolved': event(delivery.extend({ outcome: z.string() }), data => `settled the delivery of ${data.number}, version ${data.version}: ${data.outcome}`),
  'task.taken': event(z.object({ kind: z.string(), from: z.string().nullable() }), data => `${data.from ? 'took over' : 'took'} a task (${data.kind})`),
  'task.made': event(z.object({ kind: z.string() }), data => `a task was made (${data.kind})`),
  'task.done': event(z.object({ kind: z.string() }), data => `finished a task (${data.kind})`),
} as const
