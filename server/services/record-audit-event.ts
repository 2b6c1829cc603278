import { randomUUID } from 'node:crypto'
import { compiled } from '#server/database/compiled'
import type { Database, Trx } from '#server/database/connection'
import type { AuditEvent } from '#server/database/tables/audit-event'
import { auditEvents, type AuditEventData, type AuditEventName } from '#shared/audit-events'
import { now, type ServiceContext } from './context'

/** What the first link of a chain points to. */
export const CHAIN_START = '0'.repeat(64)
export const AUDIT_HEAD = 'audit-head'

export interface NewAudit<N extends AuditEventName> {
  name: N
  /** Kind of thing: 'referral', 'study', 'report', 'user', 'site' … */
  subject: string
  subjectId: string
  siteId?: string | null
  patientId?: string | null
  data: AuditEventData<N>
}

/** The text that a link's HMAC covers: every column and the HMAC before it, in a fixed order. */
export function auditLinkText(event: Omit<AuditEvent, 'mac'>): string {
  return JSON.stringify([event.seq, event.id, event.at, event.actorId, event.actorLabel, event.siteId, event.name, event.subject, event.subjectId, event.patientId, event.dataJson, event.previousMac])
}

/** Proof of the last link; without the key nobody can make one for a shortened chain. */
export function headProof(mac: (text: string) => string, seq: number, lastMac: string): string {
  return `${seq}:${mac(`head:${seq}:${lastMac}`)}`
}

/**
 * Writes one event to the audit trail, in the transaction of the act itself: both happen or neither.
 * Names, data and sentences are listed in shared/audit-events.ts.
 * @returns the HMAC of the new link, the head of the chain
 * @example await recordAuditEvent(context, trx, { name: 'site.changed', subject: 'site', subjectId: id, siteId: id, data: { fields: ['town'] } })
 */
export async function recordAuditEvent<N extends AuditEventName>(context: ServiceContext, trx: Trx, event: NewAudit<N>): Promise<string> {
  const dataJson = JSON.stringify(auditEvents[event.name].schema.parse(event.data))
  const last = await lastAudit(trx)
  const link = {
    seq: (last?.seq ?? 0) + 1, id: randomUUID(), at: now(context), actorId: context.actor.userId, actorLabel: context.actor.label,
    siteId: event.siteId ?? null, name: event.name, subject: event.subject, subjectId: event.subjectId, patientId: event.patientId ?? null,
    dataJson, previousMac: last?.mac ?? CHAIN_START,
  }
  const mac = context.keys.auditMac(auditLinkText(link))
  await insertLink(trx, [...Object.values(link), mac])
  await setHead(trx, AUDIT_HEAD, headProof(context.keys.auditMac, link.seq, mac))
  return mac
}

/** The head of the audit chain, as reports print it and backups keep it. */
export async function auditHead(db: Database | Trx): Promise<string> {
  return (await lastAudit(db))?.mac ?? CHAIN_START
}

async function lastAudit(db: Database | Trx) {
  return (await selectLast(db, [1]))[0]
}

const selectLast = compiled(db => db.selectFrom('auditEvent').select(['seq', 'mac']).orderBy('seq', 'desc').limit(1).compile())

/** The columns in the order in which `recordAuditEvent` puts a link together. */
const insertLink = compiled(db => db.insertInto('auditEvent').values({
  seq: 0, id: '', at: '', actorId: '', actorLabel: '', siteId: '', name: '', subject: '', subjectId: '', patientId: '', dataJson: '', previousMac: '', mac: '',
}).compile())

const upsertMeta = compiled(db => db.insertInto('meta').values({ key: '', value: '' }).onConflict(conflict => conflict.column('key').doUpdateSet(eb => ({ value: eb.ref('excluded.value') }))).compile())

/** Keeps the proof of a chain's last link. */
export async function setHead(trx: Trx, key: string, value: string): Promise<void> {
  await upsertMeta(trx, [key, value])
}

export { recordView } from './record-view'
