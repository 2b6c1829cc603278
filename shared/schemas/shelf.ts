import * as z from 'zod'
import { idSchema, isoDateSchema } from './common'
import type { ReferenceTable } from './reference-table'

export const adoptionSchema = z.object({
  siteId: z.string().min(1, 'Choose the site.'),
  setId: idSchema,
  setVersion: z.number().int().min(1),
  /** null: for every technique it has limits for. */
  techniques: z.array(idSchema).max(200).nullable().default(null),
  effectiveOn: isoDateSchema,
})
export const rowChecksSchema = z.object({ setId: idSchema, setVersion: z.number().int().min(1), rowIds: z.array(idSchema).min(1, 'Choose at least one row.').max(2000) })

/** GET /api/shelf/sets */
export interface ShelfSet {
  id: string
  version: number
  title: string
  citation: string
  population: string
  rows: number
  limitRows: number
  recalledRows: number
  checkedRows: number
  /** null for a set that comes with the program */
  importedBy: string | null
  importedAt: string | null
  adoptedAt: { id: string, siteId: string, siteName: string, techniques: string[] | null, effectiveOn: string, approvedBy: string | null, proposedBy: string, proposedById: string, endedOn: string | null, state: 'proposed' | 'approved' | 'in-use' | 'ended' }[]
}
/** GET /api/shelf/sets/:id, beside the fields of the set itself. */
export interface RowCheckView { rowId: string, checkedBy: string, checkedAt: string }
export type ShelfSetView = ReferenceTable & { rowChecks: RowCheckView[] }

/** Where a set is in use, was, or is proposed to be. */
export type AdoptionView = ShelfSet['adoptedAt'][number]

export const whatIfSchema = z.object({
  siteId: z.string().min(1, 'Choose the site.'), setId: idSchema, setVersion: z.coerce.number().int().min(1),
  /** The set in use that it would take the place of; left out: beside all others. */
  insteadOf: idSchema.optional(),
  count: z.coerce.number().int().min(1, 'Enter 1 to 300 studies.').max(300, 'Enter 1 to 300 studies.').default(50),
})
export interface WhatIfChange { studyId: string, number: string, key: string, label: string, print: string, before: string, after: string, flagChanges: boolean }
/** GET /api/shelf/what-if */
export interface WhatIfAnswer { studies: number, changes: WhatIfChange[] }
