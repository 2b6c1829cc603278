import * as z from 'zod'
import { idSchema } from './common'

/** Where a page stands in a study; `leaving` when it is closed. */
export const presenceSchema = z.object({
  tab: idSchema,
  runId: idSchema.nullable().default(null),
  rowId: idSchema.nullable().default(null),
  field: z.string().max(60).nullable().default(null),
  leaving: z.boolean().default(false),
})

export interface PersonHere { tab: string, userId: string, name: string, runId: string | null, rowId: string | null, field: string | null }
