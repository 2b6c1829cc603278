import type { Insertable, Selectable } from 'kysely'

/** One stored cell save: a repeat with the same save id is answered from here and not stored twice. */
export interface StudyCellSaveTable {
  studyId: string
  saveId: string
  rowId: string
  field: string
  revision: number
  savedAt: string
}
export type StudyCellSave = Selectable<StudyCellSaveTable>
export type NewStudyCellSave = Insertable<StudyCellSaveTable>
