import { randomUUID } from 'node:crypto'
import type Sqlite from 'better-sqlite3'
import type { AuditEvent } from '#server/database/tables/audit-event'
import type { Keys } from '#server/services/keys'
import { AUDIT_HEAD, auditLinkText, CHAIN_START, headProof } from '#server/services/record-audit-event'
import { auditEvents, type AuditEventData, type AuditEventName } from '#shared/audit-events'
import type { Writer } from './writer'

export type BulkEvent<N extends AuditEventName> = Pick<AuditEvent, 'at' | 'actorId' | 'actorLabel' | 'siteId' | 'subject' | 'subjectId' | 'patientId'> & { name: N, data: AuditEventData<N> }

/** `recordAuditEvent` for many events of one transaction: the last link is read once and its proof written once. */
export class AuditChain {
  private seq = 0
  head = CHAIN_START

  constructor(private readonly database: Sqlite.Database, private readonly keys: Keys) {}

  /** At the start of a transaction: the server beside this program writes too. */
  begin(): void {
    const last = this.database.prepare('select seq, mac from audit_event order by seq desc limit 1').get() as { seq: number, mac: string } | undefined
    this.seq = last?.seq ?? 0
    this.head = last?.mac ?? CHAIN_START
  }

  add<N extends AuditEventName>(writer: Writer, { at, actorId, actorLabel, siteId, name, subject, subjectId, patientId, data }: BulkEvent<N>): void {
    const dataJson = JSON.stringify(auditEvents[name].schema.parse(data))
    const link = { seq: this.seq + 1, id: randomUUID(), at, actorId, actorLabel, siteId, name, subject, subjectId, patientId, dataJson, previousMac: this.head }
    const mac = this.keys.auditMac(auditLinkText(link))
    writer.insert('auditEvent', { ...link, mac })
    this.seq = link.seq
    this.head = mac
  }

  keep(): void {
    this.database.prepare('insert into meta (key, value) values (?, ?) on conflict (key) do update set value = excluded.value').run(AUDIT_HEAD, headProof(this.keys.auditMac, this.seq, this.head))
  }
}
