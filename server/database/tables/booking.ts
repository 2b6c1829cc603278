import type { Generated, Insertable, Selectable } from 'kysely'

export interface BookingTable {
  id: string
  referralId: string
  siteId: string
  room: string
  technologistId: string | null
  startsAt: string
  endsAt: string
  state: 'booked' | 'arrived' | 'attended' | 'did-not-attend' | 'cancelled'
  reason: Generated<string>
  arrivedAt: string | null
  createdAt: string
  createdBy: string
}
export type Booking = Selectable<BookingTable>
export type NewBooking = Insertable<BookingTable>
