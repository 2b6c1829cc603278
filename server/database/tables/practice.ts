import type { Generated, Insertable, Selectable } from 'kysely'

export interface PracticeTable {
  id: string
  name: string
  town: string
  address: Generated<string>
  phone: Generated<string>
  deliveryMethod: Generated<'encrypted-pdf' | 'collection-link'>
  passphraseSealed: string | null
  passphraseMadeAt: string | null
  /** When the hand-over was noted; the day and the way stand beside it. */
  passphraseHandedOverAt: string | null
  passphraseHandedOverOn: string | null
  passphraseHandedOverBy: 'telephone' | 'letter' | 'in-person' | null
  /** To whom: a physician or a delegate of the practice. */
  passphraseHandedOverTo: Generated<string>
  closedAt: string | null
  createdAt: string
}
export type Practice = Selectable<PracticeTable>
export type NewPractice = Insertable<PracticeTable>
