import type { Generated, Insertable, Selectable } from 'kysely'

export interface OrganisationTable {
  id: string
  name: string
  paperSize: Generated<'A4' | 'LETTER'>
  reportLanguage: Generated<string>
  timeZone: string
  disclaimer: string
  demonstration: Generated<number>
  createdAt: string
}
export type Organisation = Selectable<OrganisationTable>
export type NewOrganisation = Insertable<OrganisationTable>
