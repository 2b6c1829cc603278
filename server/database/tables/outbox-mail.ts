import type { Generated, Insertable, Selectable } from 'kysely'

export interface OutboxMailTable {
  id: string
  template: string
  deliveryId: string | null
  toAddress: string
  dataSealed: Generated<string>
  messageId: string
  state: 'held' | 'queued' | 'sending' | 'sent' | 'failed' | 'given-up' | 'bounced' | 'uncertain' | 'withdrawn'
  dueAt: string
  attempts: Generated<number>
  leaseOwner: string | null
  leaseUntil: string | null
  /** Set just before the last byte goes out: from then on only the server's answer tells whether it was accepted. */
  lastByteAt: string | null
  lastError: Generated<string>
  sentAt: string | null
  createdAt: string
}
export type OutboxMail = Selectable<OutboxMailTable>
export type NewOutboxMail = Insertable<OutboxMailTable>
