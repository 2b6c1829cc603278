import * as z from 'zod'
import { idSchema, pageQuerySchema, type Page } from './common'
import { urgencies, type Urgency } from './referral'
import { studyStates, type StudyState } from '../states'
import type { ReadingRow } from './report'

/** How long a study may wait unsigned before it counts: hours, as the clinics watch it (more than a day, two days, a week). */
export const unsignedAges = [24, 48, 168] as const

/** GET /api/reading. `mine` holds the studies of people who are away and covered by the asker. */
export const readingQuerySchema = pageQuerySchema.extend({
  state: z.enum(studyStates).optional(),
  siteId: z.string().optional(),
  assigned: z.enum(['mine', 'unassigned']).optional(),
  reader: idSchema.optional(),
  urgency: z.enum(urgencies).optional(),
  older: z.coerce.number().int().min(1).max(10_000).optional(),
})

/** `waiting`: how many studies of these sites wait unsigned, and how many of them longer than each of `unsignedAges`. */
export interface ReadingPage extends Page<ReadingRow> { /** by the clocks of the organisation */ signWithinHours: Record<Urgency, number>, waiting: { all: number, older: { hours: number, count: number }[] } }

export const assignSchema = z.object({ readerId: idSchema })
/** Who may read at the site of a study, and who of them is away today. */
export interface PossibleReader { id: string, name: string, away: boolean }

export const emergencySearchSchema = z.object({ words: z.string().trim().min(3, 'Enter at least three letters of the name, or the number.').max(200) })
export const openInEmergencySchema = z.object({
  studyId: idSchema,
  reason: z.string().trim().min(10, 'Say in a sentence why you need this record now.').max(500),
})
/** What the search for an emergency shows: who, where and since when; no result and no question. */
export interface EmergencyHit { studyId: string, number: string, patientName: string, birthDate: string, recordNumber: string, siteName: string, state: StudyState, stateSince: string, urgency: Urgency }
export interface EmergencyAccessRow extends EmergencyHit { expiresAt: string }
