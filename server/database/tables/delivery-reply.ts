import type { Generated, Insertable, Selectable } from 'kysely'

/** "I think this is wrong", in the recipient's words, about the version of the delivery; and what was answered. */
export interface DeliveryReplyTable {
  id: string
  deliveryId: string
  words: string
  fromName: Generated<string>
  at: string
  answer: Generated<string>
  answeredAt: string | null
  answeredBy: string | null
}
export type DeliveryReply = Selectable<DeliveryReplyTable>
export type NewDeliveryReply = Insertable<DeliveryReplyTable>
