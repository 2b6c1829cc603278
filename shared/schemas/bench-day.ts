import * as z from 'zod'
import { confirmSchema } from './bench'
import { idSchema, isoDateSchema, referralSides } from './common'
import { cautions, threeAnswers, urgencies, type UploadView } from './referral'
import { equipmentKinds, type EquipmentView } from '../equipment'

/**
 * Who watched over the recording, and from where. In-room, in-suite, live picture and sound, and general correspond to
 * the levels of supervision of diagnostic tests of 42 CFR 410.32(b)(3) (personal, direct, direct by audio and video,
 * general); local rules decide which one is enough.
 */
export const supervisions = ['in-room', 'in-suite', 'live-video', 'general'] as const
export type Supervision = (typeof supervisions)[number]
export const supervisionLabels: Record<Supervision, string> = { 'in-room': 'in the room', 'in-suite': 'in the suite', 'live-video': 'live video', 'general': 'general' }

export const tolerances = ['well', 'with-discomfort', 'poorly', 'ended-early'] as const
export type Tolerance = (typeof tolerances)[number]
export const toleranceLabels: Record<Tolerance, string> = { 'well': 'well', 'with-discomfort': 'with discomfort', 'poorly': 'poorly', 'ended-early': 'ended early at the patient\'s wish' }

/** PUT /api/studies/:id/circumstances. */
export const circumstancesSchema = z.object({
  room: z.string().trim().max(60).default(''),
  supervision: z.enum(supervisions).nullable().default(null),
  supervisorId: idSchema.nullable().default(null),
  equipmentIds: z.array(idSchema).max(10).default([]),
  tolerance: z.enum(tolerances).nullable().default(null),
  toleranceNote: z.string().trim().max(300).default(''),
  told: z.string().trim().max(300).default(''),
  revision: z.number().int().min(0),
})
export type CircumstancesInput = z.infer<typeof circumstancesSchema>

const dueDay = z.union([isoDateSchema, z.literal('')]).nullable().default(null).transform(day => day || null)
export const equipmentSchema = z.object({
  name: z.string().trim().min(1, 'Enter the name, as it is written on the device.').max(80),
  serial: z.string().trim().max(60).default(''),
  kind: z.enum(equipmentKinds, 'Choose the kind.'),
  calibrationDue: dueDay,
  safetyDue: dueDay,
})
export type EquipmentInput = z.infer<typeof equipmentSchema>
export const changeEquipmentSchema = equipmentSchema.partial().extend({ retired: z.boolean().optional(), revision: z.number().int().min(1) })

export const commentSchema = z.object({ text: z.string().trim().min(1, 'Write the comment.').max(2000), runId: idSchema.nullable().default(null) })

export const studyErrorSchema = z.object({ reason: z.string().trim().min(3, 'Give the reason.').max(500) })
export const moveStudySchema = studyErrorSchema.extend({ toReferralId: z.string().min(1, 'Choose the referral of the right patient.').max(64) })
export const visitSchema = confirmSchema.omit({ side: true, sideReason: true }).extend({ reason: z.string().trim().min(3, 'Say why the study goes on at another visit.').max(300) })

const clock = z.string().regex(/^([01]\d|2[0-3]):[0-5]\d$/, 'Enter the time as hours and minutes, for example 14:30.')
export const laterEntrySchema = z.object({
  date: isoDateSchema,
  time: clock,
  measuredBy: z.string().trim().min(3, 'Enter who measured.').max(120),
  reason: z.string().trim().min(3, 'Say why it is entered later.').max(300),
})
export type LaterEntryInput = z.infer<typeof laterEntrySchema>

/** What follows a stopped study: a technical report of what was measured, or the referral is closed with a reason. */
export const afterStopSchema = z.discriminatedUnion('next', [
  z.object({ next: z.literal('technical-report') }),
  z.object({ next: z.literal('close-referral'), reason: z.string().trim().min(3, 'Give the reason.').max(500) }),
])

const cautionIds = cautions.map(caution => caution.id) as [(typeof cautions)[number]['id'], ...(typeof cautions)[number]['id'][]]
/** A patient who is here without a booking: what is needed to begin, the rest is completed afterwards. */
export const walkInSchema = z.object({
  siteId: idSchema,
  patientId: z.string().min(1, 'Choose the patient.').max(64),
  clinicalQuestion: z.string().trim().min(3, 'Enter the clinical question in one sentence.').max(500),
  side: z.enum(referralSides, 'Choose the side.'),
  protocol: z.string().min(1, 'Choose a protocol.').max(80),
  urgency: z.enum(urgencies).default('routine'),
  urgencyReason: z.string().trim().max(300).default(''),
  physicianId: idSchema.nullable().default(null),
  symptoms: z.string().trim().max(2000).default(''),
  cautions: z.partialRecord(z.enum(cautionIds), z.enum(threeAnswers)).default({}),
  /** False only puts the patient on the day's list, as arrived. */
  start: z.boolean().default(true),
}).superRefine((input, context) => {
  if (input.urgency !== 'routine' && input.urgencyReason.length < 3) context.addIssue({ code: 'custom', path: ['urgencyReason'], message: 'Say why it is urgent.' })
  for (const id of ['cardiac-device', 'temporary-pacing-wire'] as const) {
    if ((input.cautions[id] ?? 'not-asked') === 'not-asked') context.addIssue({ code: 'custom', path: [`cautions.${id}`], message: `Ask about: ${cautions.find(caution => caution.id === id)!.label.toLowerCase()}.` })
  }
})
export type WalkInInput = z.infer<typeof walkInSchema>

export interface CircumstancesView { room: string, supervision: Supervision | null, supervisorId: string | null, supervisorName: string, equipment: EquipmentView[], tolerance: Tolerance | null, toleranceNote: string, told: string, revision: number }
export interface CommentView { id: string, runId: string | null, text: string, at: string, byName: string }
export interface VisitView { day: string, startedAt: string, reason: string, technologistName: string }
export interface LaterEntryView { measuredAt: string, measuredBy: string, reason: string, enteredAt: string, enteredByName: string }
/** `from`: the values came from there; `to`: they went there. A number only: the other record belongs to another person. */
export interface MoveView { direction: 'from' | 'to', studyId: string, number: string, reason: string, at: string, byName: string, checkedAt: string | null, checkedByName: string }

/** What stands around a study at the bench. */
export interface StudyAround {
  circumstances: CircumstancesView
  /** Sentences of what was overdue on the day of the study. */
  overdue: string[]
  comments: CommentView[]
  attachments: UploadView[]
  /** Visits after the first. */
  visits: VisitView[]
  laterEntry: LaterEntryView | null
  move: MoveView | null
  stopped: { reason: string, at: string, byName: string } | null
  protocol: { id: string, label: string, version: number, basis: string } | null
}

/** What the bench may choose from at its site. */
export interface BenchChoices { rooms: string[], supervisors: { id: string, name: string }[], equipment: EquipmentView[] }

/** What a report says of the circumstances; frozen with it. */
export type ReportBench = Pick<StudyAround, 'circumstances' | 'overdue' | 'visits' | 'laterEntry' | 'move' | 'stopped'> & { protocol: { label: string, version: number } | null }

/** Why a planned run was left out, in the words that most often fit; the technologist adds their own. */
export const notDoneReasons = ['not needed for the question', 'patient declined', 'could not be tolerated', 'wound or dressing', 'swelling', 'plaster or splint', 'amputated', 'no time left', 'equipment failed'] as const
