import type { Generated, Insertable, Selectable } from 'kysely'

export interface DeliveryTable {
  id: string
  reportVersionId: string
  physicianId: string
  practiceId: string
  siteId: string
  address: string
  method: 'encrypted-pdf' | 'collection-link' | 'letter' | 'telephone'
  state: 'held' | 'queued' | 'sending' | 'sent' | 'acknowledged' | 'failed' | 'given-up' | 'bounced' | 'uncertain' | 'withdrawn' | 'by-hand'
  stateSince: string
  stateReason: Generated<string>
  holdUntil: string | null
  attempts: Generated<number>
  acknowledgeTokenHash: string | null
  acknowledgedAt: string | null
  sentAt: string | null
  createdAt: string
  /** The collection link works again from here on. */
  linkRenewedAt: string | null
}
export type Delivery = Selectable<DeliveryTable>
export type NewDelivery = Insertable<DeliveryTable>
