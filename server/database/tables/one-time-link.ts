import type { Generated, Insertable, Selectable } from 'kysely'

export interface OneTimeLinkTable {
  tokenHash: string
  purpose: string
  userId: string | null
  dataJson: Generated<string>
  createdAt: string
  expiresAt: string
  usedAt: string | null
}
export type OneTimeLink = Selectable<OneTimeLinkTable>
export type NewOneTimeLink = Insertable<OneTimeLinkTable>
