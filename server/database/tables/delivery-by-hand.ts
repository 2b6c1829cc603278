import type { Generated, Insertable, Selectable } from 'kysely'

/** A report that people delivered: how, to whom, when, and whether it was read back. */
export interface DeliveryByHandTable {
  id: string
  deliveryId: string
  means: 'letter' | 'telephone' | 'in-person'
  told: string
  at: string
  readBack: Generated<number>
  note: Generated<string>
  recordedAt: string
  recordedBy: string
}
export type DeliveryByHand = Selectable<DeliveryByHandTable>
export type NewDeliveryByHand = Insertable<DeliveryByHandTable>
