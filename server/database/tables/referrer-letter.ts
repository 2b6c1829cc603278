import type { Generated, Insertable, Selectable } from 'kysely'

/** What the referring physician is asked or told through a mailed link; the mail itself says nothing of the patient. */
export interface ReferrerLetterTable {
  id: string
  referralId: string
  kind: 'information' | 'advice'
  physicianId: string | null
  /** Ids of shared/return-reasons.ts. */
  reasonsJson: Generated<string>
  note: Generated<string>
  createdAt: string
  createdBy: string
  /** The last mail of it in the outbox; null when the physician could not be mailed. */
  mailId: string | null
  mailedAt: string | null
  remindedAt: string | null
  reminders: Generated<number>
  wrongBirths: Generated<number>
  closedAt: string | null
  closedBecause: 'answered' | 'read' | 'received' | 'withdrawn' | 'guessed' | null
  /** What came back: changed fields with what stood before, free words, files. */
  answerJson: string | null
  /** When somebody of the clinic noted what came back. */
  seenAt: string | null
}
export type ReferrerLetter = Selectable<ReferrerLetterTable>
export type NewReferrerLetter = Insertable<ReferrerLetterTable>
