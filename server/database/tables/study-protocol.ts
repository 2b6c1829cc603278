import type { Selectable } from 'kysely'

/** The protocol that laid out a study, as it stood then. */
export interface StudyProtocolTable {
  studyId: string
  protocolId: string
  label: string
  version: number
  bodyJson: string
}
export type StudyProtocol = Selectable<StudyProtocolTable>
