import type { Generated, Insertable, Selectable } from 'kysely'

export interface UserTable {
  id: string
  email: string
  /** When a mail to this very address was answered; null again as soon as the address changes. */
  emailConfirmedAt: Generated<string | null>
  name: string
  printedName: Generated<string>
  credentials: Generated<string>
  passwordHash: string | null
  totpSecretSealed: string | null
  totpEnabledAt: string | null
  totpLastStep: number | null
  lastSeenAt: string | null
  /** 1: writes reports and does not sign them. */
  inTraining: Generated<number>
  deactivatedAt: string | null
  createdAt: string
  createdBy: Generated<string | null>
}
export type User = Selectable<UserTable>
export type NewUser = Insertable<UserTable>
