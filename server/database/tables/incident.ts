import type { Generated, Insertable, Selectable } from 'kysely'

/** A report that reached somebody it was not meant for: what is known, what was done, what was decided, by whom. */
export interface IncidentTable {
  id: string
  deliveryId: string
  siteId: string
  reason: string
  /** From here both clocks run. */
  awareAt: string
  openedAt: string
  openedBy: string | null
  dataNature: Generated<string>
  whoGotIt: Generated<string>
  viewed: Generated<'no' | 'yes' | 'unknown'>
  viewedWords: Generated<string>
  mitigation: Generated<string>
  contactName: Generated<string>
  contactAt: string | null
  contactMeans: 'telephone' | 'letter' | 'in-person' | 'e-mail' | null
  contactWords: Generated<string>
  deletionConfirmed: Generated<number>
  decision: 'nobody' | 'authority' | 'individuals' | 'both' | null
  decisionReason: Generated<string>
  toldAt: string | null
  closedAt: string | null
  closedBy: string | null
  revision: Generated<number>
}
export type Incident = Selectable<IncidentTable>
export type NewIncident = Insertable<IncidentTable>
