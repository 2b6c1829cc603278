import type { Generated, Insertable, Selectable } from 'kysely'

export interface SessionTable {
  idHash: string
  userId: string
  createdAt: string
  lastUsedAt: string
  expiresAt: string
  secondFactor: Generated<number>
  agent: Generated<string>
  endedAt: string | null
  endedBecause: string | null
}
export type Session = Selectable<SessionTable>
export type NewSession = Insertable<SessionTable>
