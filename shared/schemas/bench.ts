import * as z from 'zod'
import { idSchema, isoDateTimeSchema, sideSchema } from './common'
import { entrySchema, runSchema, type RunRow, type Study } from './study'
import type { BenchChoices, StudyAround } from './bench-day'
import type { PatientBand } from './patient'
import { cautionIds, type RouteNode, type UploadView, type Urgency } from './referral'
import type { AdoptedSet, Assessment, Policy } from '../calculations/types'
import type { StudyState } from '../states'

/** One line of the bench's day list. */
export interface BenchRow {
  bookingId: string | null
  referralId: string
  studyId: string | null
  patientName: string
  birthDate: string
  recordNumber: string
  startsAt: string | null
  room: string | null
  technologistName: string | null
  question: string
  urgency: Urgency
  state: 'booked' | 'arrived' | StudyState | 'did-not-attend'
  stateSince: string
  /** When the patient arrived, and how long it took until the study began; null while not known. */
  arrivedAt: string | null
  startedAt: string | null
  returnQuestion: string
}

/** Identity, side and cautions, before anything is recorded. */
export const confirmSchema = z.object({
  /** The two identifiers the patient said aloud. */
  identifiers: z.array(z.enum(['name', 'birth-date', 'record-number', 'identifier'])).min(2, 'Confirm two identifiers.'),
  side: z.enum(['right', 'left', 'both', 'midline']),
  /** Wanted when the side differs from the referral. */
  sideReason: z.string().trim().max(300).default(''),
  cautionsRead: z.literal(true, 'Confirm that the cautions were read.'),
})
/** What the patient answered when the technologist asked. */
export const cautionsAskedSchema = z.object({ answers: z.partialRecord(z.enum(cautionIds), z.enum(['yes', 'no'])) })
export type Confirmation = z.infer<typeof confirmSchema> & { at: string, byName: string }

/**
 * Compare-and-set on one cell. `revision` is the one the browser last saw (0 for a blank cell);
 * `entry` null empties the cell. A repeat with the same `saveId` is answered as before, not stored twice.
 */
export const saveCellSchema = z.object({
  saveId: idSchema,
  rowId: idSchema,
  /** A quantity id, or `ordinal:<id>`, or `series` (entry is then an array). */
  field: z.string().max(60),
  entry: z.union([entrySchema, z.string().max(200), z.array(entrySchema).max(200), z.null()]),
  revision: z.number().int().min(0),
})
export const saveCellsSchema = z.object({ cells: z.array(saveCellSchema).min(1).max(400) })
export type SaveCell = z.infer<typeof saveCellSchema>
export type SavedCell
  = | { saveId: string, rowId: string, field: string, saved: true, revision: number, savedAt: string }
    | { saveId: string, rowId: string, field: string, saved: false, because: 'changed-meanwhile', theirs: { entry: unknown, revision: number, by: string, at: string } }
    | { saveId: string, rowId: string, field: string, saved: false, because: 'not-valid', message: string }

export const addRunSchema = z.object({ technique: idSchema, side: sideSchema, repeats: idSchema.optional(), afterRunId: idSchema.optional() })
export const addRowSchema = z.object({ site: idSchema })
/** Everything of a run that is not a cell. */
export const changeRunSchema = runSchema.pick({ direction: true, amplitudeDefinition: true, lowFrequencyFilterHz: true, elbowFlexionDegrees: true, shortSegments: true, temperatureId: true, repeats: true, quality: true, notDoneBecause: true, recordedAt: true }).partial().extend({ revision: z.number().int().min(0) })
/** Taking away a run or a row: the reason is needed when it has values or the protocol plans it. DELETE may come without a body. */
export const removeSchema = z.object({ reason: z.string().trim().max(500).default('') }).default({ reason: '' })
export const bodySizeSchema = z.object({ heightCm: z.number().min(30, 'Height must be between 30 and 250 centimetres.').max(250, 'Height must be between 30 and 250 centimetres.').nullable(), weightKg: z.number().min(1, 'Weight must be between 1 and 400 kilograms.').max(400, 'Weight must be between 1 and 400 kilograms.').nullable() })
export const addTemperatureSchema = z.object({ segment: z.enum(['hand', 'foot']), side: sideSchema, celsius: z.number().min(15, 'Temperature must be between 15 and 42 °C.').max(42, 'Temperature must be between 15 and 42 °C.'), method: z.string().max(100).default('skin probe'), warmed: z.boolean().default(false), at: isoDateTimeSchema.optional() })
export const keepCheckSchema = z.object({ key: z.string().max(200), reason: z.string().trim().min(3, 'Give the reason.').max(500) })
export const handOverSchema = z.object({ note: z.string().trim().max(2000).default('') })
export const returnSchema = z.object({ question: z.string().trim().min(3, 'Write the question.').max(500), runId: idSchema.nullable().default(null) })

/** GET /api/studies/:id: everything the bench and the reading page need. */
export interface StudyView {
  id: string
  number: string
  state: StudyState
  stateSince: string
  siteId: string
  siteName: string
  referralId: string
  patientId: string
  protocol: string | null
  band: PatientBand
  route: RouteNode[]
  referral: { question: string, symptoms: string, onset: string, examination: string, provisionalDiagnosis: string, previousStudies: string, urgency: Urgency, side: PatientBand['side'], cautions: { id: string, label: string, answer: 'yes' | 'no' | 'not-asked' }[] }
  confirmation: Confirmation | null
  technologistName: string | null
  readerId: string | null
  readerName: string | null
  handOverNote: string
  returnQuestion: string
  returnRunId: string | null
  study: Study
  /** Revision of each cell: key `${rowId}/${field}`. */
  cellRevisions: Record<string, number>
  runRevisions: Record<string, number>
  plannedRunIds: string[]
  policy: Policy
  adopted: AdoptedSet[]
  assessment: Assessment
  uploads: UploadView[]
  around: StudyAround
  choices: BenchChoices
  /** Typed values of earlier studies of this patient, by `technique/side`, then by site and field: from the latest study that has them. */
  earlier: Record<string, { studyId: string, studyDate: string, siteName: string, rows: Record<string, RunRow['values']> }>
  mayRecord: boolean
  mayRead: boolean
  /** False for whoever is in training: they write, a supervisor signs. */
  maySign: boolean
  /** Opened without a role at the site, for a stated reason, until this moment. */
  emergency: { reason: string, until: string } | null
}
