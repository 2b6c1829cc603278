import type { Generated, Insertable, Selectable } from 'kysely'

export interface AuditEventTable {
  seq: Generated<number>
  id: string
  at: string
  actorId: string | null
  actorLabel: string
  siteId: string | null
  name: string
  subject: string
  subjectId: string
  patientId: string | null
  dataJson: string
  previousMac: string
  mac: string
}
export type AuditEvent = Selectable<AuditEventTable>
export type NewAuditEvent = Insertable<AuditEventTable>
