import type { Generated, Insertable, Selectable } from 'kysely'

export interface StateChangeTable {
  id: Generated<number>
  subject: 'referral' | 'study' | 'report-version' | 'delivery'
  subjectId: string
  fromState: string | null
  toState: string
  at: string
  byUserId: string | null
  reason: Generated<string>
}
export type StateChange = Selectable<StateChangeTable>
export type NewStateChange = Insertable<StateChangeTable>
