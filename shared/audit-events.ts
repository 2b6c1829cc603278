import * as z from 'zod'
import { benchEvents } from './audit-events/bench'
import { directoryEvents } from './audit-events/directory'
import { intakeEvents } from './audit-events/intake'
import { reportEvents } from './audit-events/report'
import { shelfEvents } from './audit-events/shelf'

/**
 * The audit trail's vocabulary: one list, one entry each. An entry is the shape of its data and the sentence that the
 * ledger shows. Data holds ids, codes, states and the names of changed fields; never a password, a token, or a text
 * about a patient that stands elsewhere anyway. Old entries stay for ever: events that use them do.
 */
export interface AuditEventKind<S extends z.ZodType> { schema: S, sentence: (data: z.output<S>) => string }

function event<S extends z.ZodType>(schema: S, sentence: (data: z.output<S>) => string): AuditEventKind<S> {
  return { schema, sentence }
}
const nothing = z.object({})
/** Changed fields with old and new value; older events have the names of the fields alone. */
const values = z.object({ fields: z.array(z.string()).optional(), changes: z.array(z.object({ field: z.string(), before: z.unknown(), after: z.unknown() })).default([]) })
const changed = (data: z.output<typeof values>) => list([...data.fields ?? [], ...data.changes.map(change => change.field)])
const dates = (data: { startsOn?: string, endsOn?: string | null }) => `${data.startsOn ? ` from ${data.startsOn}` : ''}${data.endsOn ? ` until ${data.endsOn}` : ''}`
const because = z.object({ because: z.string() })
const absence = z.object({ fromDay: z.string(), toDay: z.string(), coveredBy: z.string() })
const list = (words: readonly string[]) => words.join(', ')

export const auditEvents = {
  // Accounts, sites, access
  'session.signed-in': event(z.object({ secondFactor: z.boolean(), recoveryCode: z.boolean().default(false) }), data => `signed in${data.recoveryCode ? ' with a recovery code' : data.secondFactor ? ' with a second factor' : ''}`),
  'session.refused': event(z.object({ because: z.string(), address: z.string().default('') }), data => `a sign-in was refused: ${data.because}`),
  'session.ended': event(z.object({ because: z.string(), count: z.number().int().default(1) }), data => `${data.count === 1 ? 'a session' : `${data.count} sessions`} ended: ${data.because}`),
  'access.refused': event(z.object({ action: z.string(), because: z.string() }), data => `access was refused (${data.action}): ${data.because}`),
  'account.password-set': event(z.object({ by: z.enum(['self', 'link', 'first-run']) }), data => `set a password${data.by === 'link' ? ' through a one-time link' : ''}`),
  'account.second-factor-set': event(z.object({ replaced: z.boolean() }), data => data.replaced ? 'replaced the second factor' : 'set up the second factor'),
  'account.second-factor-removed': event(nothing, () => 'the second factor was removed through a one-time link'),
  'account.reset-asked': event(z.object({ address: z.string(), outcome: z.enum(['mailed', 'two people needed', 'address not confirmed', 'no such account']) }), data => `a new password was asked for by mail: ${data.outcome}`),
  'account.address-code-sent': event(nothing, () => 'asked for a code to confirm the own address'),
  'account.address-confirmed': event(z.object({ by: z.enum(['link', 'code']), changed: z.boolean().default(false) }), data => data.changed ? 'changed the own e-mail address and confirmed it' : 'confirmed the own e-mail address'),
  'account.link-asked': event(nothing, () => 'asked for a link to set a password; a second person has to ask as well'),
  'account.link-made': event(z.object({ askedBy: z.string().nullable().default(null), byMail: z.boolean().default(false) }), data => `${data.byMail ? 'mailed' : 'made'} a one-time link to set a password${data.askedBy ? ', asked for by another person before' : ''}`),
  'account.profile-changed': event(values, data => `changed the own profile: ${changed(data)}`),
  'person.added': event(nothing, () => 'added a person'),
  'person.changed': event(values, data => `changed a person: ${changed(data)}`),
  'person.deactivated': event(nothing, () => 'deactivated a person'),
  'role.granted': event(z.object({ role: z.string(), startsOn: z.string().optional(), endsOn: z.string().nullish() }), data => `gave the role ${data.role}${dates(data)}`),
  'role.proposed': event(z.object({ role: z.string() }), data => `asked that the role ${data.role} be given; a second person has to agree`),
  'role.decided': event(z.object({ role: z.string(), outcome: z.enum(['approved', 'approved-alone', 'declined']) }), data => data.outcome === 'declined' ? `declined the role ${data.role}` : `agreed to the role ${data.role}${data.outcome === 'approved-alone' ? ' alone, seven days after asking, since nobody else was left' : ''}`),
  'role.dates-changed': event(z.object({ role: z.string() }).extend(values.shape), data => `changed the days of the role ${data.role}`),
  'role.ended': event(z.object({ role: z.string() }), data => `ended the role ${data.role}`),
  'absence.noted': event(absence, data => `noted an absence from ${data.fromDay} to ${data.toDay}, with cover`),
  'absence.cancelled': event(absence, data => `took back the absence from ${data.fromDay} to ${data.toDay}`),
  'site.added': event(nothing, () => 'added a site'),
  'equipment.added': event(z.object({ kind: z.string() }), () => 'added a device to a site'),
  'equipment.changed': event(z.object({ changes: z.array(z.object({ field: z.string(), before: z.unknown() })) }), data => `changed a device: ${list(data.changes.map(change => change.field))}`),
  'site.changed': event(values, data => `changed a site: ${changed(data)}`),
  'organisation.set-up': event(nothing, () => 'set up the organisation'),
  'demonstration.filled': event(z.object({ studies: z.number().int() }), data => `filled the demonstration with ${data.studies} invented studies`),
  'audit.verified': event(z.object({ events: z.number().int(), views: z.number().int(), versions: z.number().int().default(0), intact: z.boolean() }), data => `verified the trail: ${data.events} events, ${data.views} views and ${data.versions} signed versions, ${data.intact ? 'intact' : 'NOT intact'}`),
  'ledger.exported': event(z.object({ chain: z.enum(['acts', 'views']), rows: z.number().int() }), data => `exported ${data.rows} rows of the ledger (${data.chain})`),
  'patient.access-report': event(z.object({ entries: z.number().int(), handedTo: z.string() }), data => `made a report of who saw and did what with a patient's record, ${data.entries} entries, handed to: ${data.handedTo}`),
  'report.copy-for-patient': event(z.object({ number: z.string(), version: z.number().int(), handedTo: z.string() }), data => `gave a copy of ${data.number}, version ${data.version}, to the patient: ${data.handedTo}`),
  'retention.hold-set': event(z.object({ holdId: z.string() }), () => 'put a record on legal hold'),
  'retention.hold-lifted': event(z.object({ holdId: z.string() }), () => 'lifted the legal hold of a record'),
  'clock.passed': event(z.object({ kind: z.string(), dueAt: z.string() }), data => `a clock ran out (${data.kind}), due ${data.dueAt.slice(0, 16).replace('T', ' ')} UTC`),
  'record.opened-with-reason': event(because.extend({ until: z.string().default('') }), data => `opened a record outside the own sites: ${data.because}`),

  // Patients, referrals, uploads, bookings, directory, studies, shelf
  ...intakeEvents,
  ...directoryEvents,
  ...benchEvents,
  ...shelfEvents,

  // Reading, report, dispatch
  ...reportEvents,
} as const satisfies Record<string, { schema: z.ZodType, sentence: (data: never) => string }>

export type AuditEventName = keyof typeof auditEvents
export type AuditEventData<N extends AuditEventName> = z.input<(typeof auditEvents)[N]['schema']>

export const auditEventNames = Object.keys(auditEvents) as AuditEventName[]

/**
 * The ledger's sentence for a stored event; an unknown name (a newer version wrote it) is shown as it is.
 * @example auditSentence('role.granted', { role: 'technologist' }) // => 'gave the role technologist'
 */
export function auditSentence(name: string, data: unknown): string {
  if (!Object.hasOwn(auditEvents, name)) return name
  const kind = auditEvents[name as AuditEventName] as unknown as AuditEventKind<z.ZodType>
  const parsed = kind.schema.safeParse(data)
  return parsed.success ? kind.sentence(parsed.data) : name
}
