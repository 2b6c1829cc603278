import type { Insertable, Selectable } from 'kysely'

export interface UploadTable {
  id: string
  referralId: string | null
  studyId: string | null
  storedName: string
  originalName: string
  mediaType: string
  byteCount: number
  sha256: string
  createdAt: string
  /** Null when it came by a mailed link: then `letterId` says which. */
  createdBy: string | null
  letterId: string | null
  removedAt: string | null
}
export type Upload = Selectable<UploadTable>
export type NewUpload = Insertable<UploadTable>
