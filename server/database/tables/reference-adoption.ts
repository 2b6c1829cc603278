import type { Generated, Insertable, Selectable } from 'kysely'

export interface ReferenceAdoptionTable {
  id: string
  siteId: string
  setId: string
  setVersion: number
  techniquesJson: string | null
  position: Generated<number>
  proposedBy: string
  proposedAt: string
  approvedBy: string | null
  approvedAt: string | null
  effectiveOn: string
  endedOn: string | null
  endedBy: string | null
}
export type ReferenceAdoption = Selectable<ReferenceAdoptionTable>
export type NewReferenceAdoption = Insertable<ReferenceAdoptionTable>
