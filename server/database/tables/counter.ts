import type { Insertable, Selectable } from 'kysely'

export interface CounterTable {
  name: string
  value: number
}
export type Counter = Selectable<CounterTable>
export type NewCounter = Insertable<CounterTable>
