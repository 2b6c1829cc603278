import * as z from 'zod'
import { idSchema, pageQuerySchema } from './common'

export const retentionQuerySchema = pageQuerySchema.extend({ show: z.enum(['past', 'held']).default('past') })
export const legalHoldSchema = z.object({ patientId: idSchema, reason: z.string().trim().min(3, 'Give the reason, for example the file number of the inquiry.').max(300) })

export interface RetentionRow {
  patientId: string
  recordNumber: string
  birthDate: string
  /** The day of the last referral, study, signature or entry. */
  lastContact: string
  /** Under 18 at the last contact. */
  child: boolean
  /** The first day after the years of the policy. */
  dueOn: string
  hold: { id: string, reason: string, setAt: string, setBy: string } | null
}
