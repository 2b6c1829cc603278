import type { Generated, Insertable, Selectable } from 'kysely'

/** A referral's appointment as the patient's own calendar knows it. */
export interface AppointmentTable {
  referralId: string
  /** Random, the same for ever: a moved appointment replaces the earlier entry. */
  uid: string
  sequence: Generated<number>
  /** The booking that the last mail told of; null when it told of none or called it off. */
  toldBookingId: string | null
  toldAddress: Generated<string>
  toldMailId: string | null
  reminderMailId: string | null
}
export type Appointment = Selectable<AppointmentTable>
export type NewAppointment = Insertable<AppointmentTable>
