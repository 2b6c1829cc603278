import type { Insertable, Selectable } from 'kysely'

export interface RecoveryCodeTable {
  id: string
  userId: string
  codeHash: string
  createdAt: string
  usedAt: string | null
}
export type RecoveryCode = Selectable<RecoveryCodeTable>
export type NewRecoveryCode = Insertable<RecoveryCodeTable>
