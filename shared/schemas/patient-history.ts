import * as z from 'zod'
import { idSchema, isoDateSchema, sideSchema } from './common'
import type { PatientView } from './patient'

export const mergeSchema = z.object({ mergedId: idSchema, reason: z.string().trim().min(5, 'Say how you know that both records are of one person.').max(500) })
export const undoMergeSchema = z.object({ reason: z.string().trim().min(5, 'Say why they are two persons.').max(500) })

/** One value as another laboratory reported it, typed by hand: shown to the reader, judged by nothing. */
export const outsideValueSchema = z.object({
  technique: idSchema, side: sideSchema, quantity: idSchema, at: z.string().max(60).default(''),
  value: z.number('Enter the value.').min(0, 'Enter the value as it was reported.').max(1000, 'Enter the value as it was reported.'),
})
export type OutsideValue = z.infer<typeof outsideValueSchema>
export const outsideStudySchema = z.object({
  performedOn: isoDateSchema,
  place: z.string().trim().min(2, 'Say where it was made.').max(120),
  summary: z.string().trim().max(2000).default(''),
  values: z.array(outsideValueSchema).max(60).default([]),
  /** A file of one of the patient's referrals. */
  uploadId: idSchema.nullable().default(null),
}).refine(study => study.summary !== '' || study.values.length > 0, { path: ['summary'], message: 'Enter what was reported, in words or values.' })

export interface OutsideStudyView { id: string, performedOn: string, place: string, summary: string, values: OutsideValue[], uploadId: string | null, enteredBy: string, enteredAt: string }
export interface HistoryLine { kind: 'referral' | 'study', id: string, number: string, day: string, siteName: string, state: string, /** null without a role at the site */ link: string | null, question: string }
export interface MergeView { id: string, keptId: string, mergedNumber: string, mergedName: string, reason: string, mergedAt: string, mergedBy: string }

/** GET /api/patients/:id/history */
export interface PatientHistory {
  patient: PatientView
  mergedInto: { id: string, recordNumber: string } | null
  lines: HistoryLine[]
  outside: OutsideStudyView[]
  uploads: { id: string, name: string }[]
  merges: MergeView[]
}
