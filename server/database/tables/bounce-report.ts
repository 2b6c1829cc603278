import type { Generated, Insertable, Selectable } from 'kysely'

/** A delivery status report (RFC 3464) that said a mail failed; each is taken once. */
export interface BounceReportTable {
  /** The report's own Message-ID, or the hash of its bytes where it has none. */
  id: string
  mailId: string
  /** As RFC 3463 has it: 5.1.1. */
  status: string
  diagnostic: Generated<string>
  at: string
}
export type BounceReport = Selectable<BounceReportTable>
export type NewBounceReport = Insertable<BounceReportTable>
